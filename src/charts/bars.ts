/** Groups of five bars, from coarse to fine, for modulation along the radius and across it. */
import { type Drawn, drawShape } from './draw.js';
import type { SettledChoices } from './options.js';
import { patchPlaces } from './patches.js';
import { direction, rectangle } from './shape.js';
import { type Sheet, tidy, wholeTurn } from './sheet.js';
import type { BarTruth, Modulation } from './truth.js';

const BARS = 5;
const GAP_PX = 12;

/** A bar in the patch's own coordinates: `along` the radius, outward, and `across` it. */
interface LocalBar {
  group: number;
  cyclesPerPixel: number;
  modulation: Modulation;
  along: number;
  across: number;
  lengthPx: number;
  widthPx: number;
}

export function drawBars(sheet: Sheet, choices: SettledChoices): Drawn {
  const { white, dark, oversample, cyclesPerPixel, sizePx = 40 } = choices;
  const frequencies = cyclesPerPixel.toSorted((a, b) => a - b);
  const pattern = layOut(frequencies, sizePx);
  const radiusPx = Math.max(
    ...pattern.map(({ along, across, lengthPx, widthPx }) =>
      Math.hypot(Math.abs(along) + lengthPx / 2, Math.abs(across) + widthPx / 2, lengthPx),
    ),
  );
  const places = patchPlaces(sheet, choices, { radiusPx, apartPx: 2 * radiusPx, most: 3 });
  const plane = sheet.blank(oversample, white);
  const bars = places.flatMap((place, patch) => {
    const { nx, ny } = direction(place.azimuthDeg);
    return pattern.map((bar): BarTruth => {
      const x = place.x + bar.along * nx - bar.across * ny;
      const y = place.y + bar.along * ny + bar.across * nx;
      const runsDeg = place.azimuthDeg + (bar.modulation === 'tangential' ? 90 : 0);
      drawShape(plane, rectangle(x, y, bar.lengthPx, bar.widthPx, runsDeg), dark - white);
      return {
        group: patch * 2 * frequencies.length + bar.group,
        cyclesPerPixel: bar.cyclesPerPixel,
        direction: bar.modulation,
        ...sheet.place(x, y),
        runsDeg: tidy(wholeTurn(runsDeg)),
        lengthPx: bar.lengthPx,
        widthPx: tidy(bar.widthPx),
      };
    });
  });
  return { plane, found: { bars } };
}

/** Two strips side by side, each with its groups one behind the other along the radius, coarse to fine and
 * outward. */
function layOut(frequencies: readonly number[], sizePx: number): LocalBar[] {
  const widest = groupWidth(frequencies[0]);
  const strip = (modulation: Modulation, across: number, extentOf: (f: number) => number): LocalBar[] => {
    const total = frequencies.reduce((sum, f) => sum + extentOf(f) + GAP_PX, -GAP_PX);
    let start = -total / 2;
    return frequencies.flatMap((f, at) => {
      const middle = start + extentOf(f) / 2;
      start += extentOf(f) + GAP_PX;
      const group = at + (modulation === 'tangential' ? 0 : frequencies.length);
      return Array.from({ length: BARS }, (_, bar) => {
        const offset = (bar - (BARS - 1) / 2) / f;
        const isAlong = modulation === 'tangential';
        return {
          group,
          cyclesPerPixel: f,
          modulation,
          along: isAlong ? middle + offset : middle,
          across: isAlong ? across : across + offset,
          lengthPx: sizePx,
          widthPx: 1 / (2 * f),
        };
      });
    });
  };
  const apart = (sizePx + widest) / 2 + GAP_PX; // of the strips' middle lines
  const shift = (sizePx - widest) / 4; // so that the two together stand in the middle of the patch
  return [
    ...strip('tangential', -apart / 2 - shift, groupWidth),
    ...strip('sagittal', apart / 2 - shift, () => sizePx),
  ];
}

/** From the first bar's outer side to the last one's. */
function groupWidth(cyclesPerPixel: number): number {
  return (BARS - 0.5) / cyclesPerPixel;
}
