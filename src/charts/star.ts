/** Stars of dark sectors: every direction of modulation at every frequency up to that of the inner rim. */
import { type Drawn, drawShape } from './draw.js';
import type { SettledChoices } from './options.js';
import { patchPlaces } from './patches.js';
import { sector } from './shape.js';
import { type Sheet, tidy } from './sheet.js';

const LARGEST_DEFAULT_PX = 360;

/** At the inner rim the star has one cycle a pixel; further in nothing is left to resolve. */
const INNER_CYCLES_PER_PIXEL = 1;

export function drawStar(sheet: Sheet, choices: SettledChoices): Drawn {
  const { white, dark, oversample, sectors: pairs } = choices;
  const sizePx =
    choices.sizePx ?? Math.min(LARGEST_DEFAULT_PX, Math.floor(Math.min(sheet.width, sheet.height) / 1.25));
  const outerPx = sizePx / 2;
  const innerPx = Math.min(outerPx / 2, pairs / (2 * Math.PI * INNER_CYCLES_PER_PIXEL));
  const plane = sheet.blank(oversample, white);
  const places = patchPlaces(sheet, choices, { radiusPx: outerPx, apartPx: 1.1 * sizePx, most: 3 });
  const sectors = places.flatMap((place, star) => {
    const ring = { x: place.x, y: place.y, innerPx, outerPx };
    return Array.from({ length: pairs }, (_, pair) => {
      // a white sector straddles the direction +x
      const fromDeg = ((pair + 0.25) * 360) / pairs;
      const toDeg = ((pair + 0.75) * 360) / pairs;
      drawShape(plane, sector(ring, fromDeg, toDeg), dark - white);
      const rim = { innerPx: tidy(innerPx), outerPx: tidy(outerPx) };
      return { star, ...place, fromDeg: tidy(fromDeg), toDeg: tidy(toDeg), ...rim };
    });
  });
  return { plane, found: { sectors } };
}
