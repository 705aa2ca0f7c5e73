// @ts-check
/** The program's own lettering, for the pictures of the demo. */
export { text, textWidth } from '../../dist/report/stroke-font.js';
