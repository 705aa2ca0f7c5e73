/** Dark discs on a grid, for distortion and lateral colour. */
import { type Drawn, drawShape } from './draw.js';
import type { SettledChoices } from './options.js';
import { patchPlaces } from './patches.js';
import { disc } from './shape.js';
import { type Sheet, tidy } from './sheet.js';

export function drawDots(sheet: Sheet, choices: SettledChoices): Drawn {
  const { white, dark, oversample, sizePx = 24 } = choices;
  const radiusPx = sizePx / 2;
  // four diameters apart: a disc's blur, and its shift by distortion between two neighbours, stay clear of
  // the next one
  const wantedPx = choices.grid === undefined && choices.fields === undefined ? 4 * sizePx : 2 * sizePx;
  const places = patchPlaces(sheet, choices, { radiusPx, apartPx: wantedPx, most: 41 });
  const plane = sheet.blank(oversample, white);
  for (const { x, y } of places) drawShape(plane, disc(x, y, radiusPx), dark - white);
  return { plane, found: { dots: places.map((place) => ({ ...place, radiusPx: tidy(radiusPx) })) } };
}
