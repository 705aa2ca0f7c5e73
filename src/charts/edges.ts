/** Slanted edges: dark squares whose sides run along and across the radius, each turned a little. */
import { againstRadius } from './against-radius.js';
import { type Drawn, drawShape } from './draw.js';
import type { SettledChoices } from './options.js';
import { patchPlaces } from './patches.js';
import { direction, rectangle } from './shape.js';
import { type Sheet, tidy, wholeTurn } from './sheet.js';
import { angleToPixels, measurableSlant } from './slant.js';
import type { ChartPlace, EdgeTruth } from './truth.js';

const LARGEST_DEFAULT_PX = 128;

export function drawEdges(sheet: Sheet, choices: SettledChoices): Drawn {
  const { white, dark, oversample, angleDeg } = choices;
  const sizePx =
    choices.sizePx ?? Math.min(LARGEST_DEFAULT_PX, Math.floor(Math.min(sheet.width, sheet.height) / 2));
  // two sides' length of white between neighbours: a corner reaches sqrt(1/2) of a side, and as much room
  // stays on either hand
  const needs = { radiusPx: sizePx * Math.SQRT1_2, apartPx: 2 * sizePx, most: 7 };
  const plane = sheet.blank(oversample, white);
  const edges = patchPlaces(sheet, choices, needs).flatMap((place, patch) => {
    const turnDeg = place.azimuthDeg + measurableSlant(place.azimuthDeg, angleDeg, sizePx / 2);
    drawShape(plane, rectangle(place.x, place.y, sizePx, sizePx, turnDeg), dark - white);
    return [0, 90, 180, 270].map((side) => edgeAt(sheet, place, patch, turnDeg + side, sizePx));
  });
  return { plane, found: { edges } };
}

/** The side of a square whose outward normal points in a direction. */
function edgeAt(
  sheet: Sheet,
  { x, y }: ChartPlace,
  patch: number,
  normalDeg: number,
  sizePx: number,
): EdgeTruth {
  const half = sizePx / 2;
  const { nx, ny } = direction(normalDeg);
  const [middleX, middleY] = [x + half * nx, y + half * ny];
  const middle = sheet.place(middleX, middleY);
  const end = (way: number): [number, number] => [
    tidy(middleX - way * half * ny),
    tidy(middleY + way * half * nx),
  ];
  const { isAlong, offDeg } = againstRadius(normalDeg, middle.azimuthDeg);
  return {
    patch,
    ...middle,
    from: end(-1),
    to: end(1),
    direction: isAlong ? 'tangential' : 'sagittal',
    normalDeg: tidy(wholeTurn(normalDeg)),
    offRadiusDeg: tidy(offDeg),
    angleDeg: tidy(angleToPixels(normalDeg)),
    roomPx: tidy(half),
  };
}
