/** The rig that a page was made from. */
import { COEFFICIENTS, type Rig } from '../../optics/rig.js';
import { significant } from '../text.js';
import { html, type Markup } from './markup.js';

export function rigFacts({ lens, camera, mount }: Rig): Markup {
  const number = (value: number) => significant(value, 5);
  const waves = COEFFICIENTS.map((name) => [name, `${number(lens.waves[name])} waves`]);
  const light =
    typeof lens.relativeIllumination === 'string' ? lens.relativeIllumination : 'a table of the lens file';
  const facts: (readonly (readonly string[])[])[] = [
    [
      ['lens', lens.name],
      ['focal length', lens.focalLengthMm === undefined ? 'not stated' : `${number(lens.focalLengthMm)} mm`],
      ['f-number of the figures', number(lens.fNumber)],
      ['full field (h = 1)', `${number(lens.fullFieldMm)} mm`],
      ['wavelength of the waves', `${number(lens.wavelengthNm)} nm`],
      ['relative illumination', light],
    ],
    waves,
    [
      ['f-number in use', number(mount.fNumber)],
      ['sensor shift', `${number(mount.sensorShiftUm)} µm`],
      ['sensor tilt about x, y', `${mount.sensorTiltDeg.map(number).join(', ')} degrees`],
      ['optical axis at', `${mount.axisPx.map((px) => significant(px, 7)).join(', ')} px`],
      ['pixels', camera.pixels.join(' x ')],
      ['pixel pitch', `${number(camera.pixelPitchUm)} µm`],
      ['fill factor', number(camera.fillFactor)],
      ['mosaic', camera.mosaic],
      ...camera.bands.map(({ name, lines }) => [
        `band ${name}`,
        lines.length > 5
          ? `${lines.length} lines, ${number(lines[0].nm)} to ${number(lines.at(-1)!.nm)} nm`
          : `${lines.map(({ nm }) => number(nm)).join(', ')} nm`,
      ]),
    ],
  ];
  return html`<dl class="facts">${facts
    .flat()
    .map(([name, value]) => html`<div><dt>${name}</dt><dd>${value}</dd></div>`)}</dl>
`;
}
