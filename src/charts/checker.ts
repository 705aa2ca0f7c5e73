/** A board of dark and white cells around the optical axis. */

import { InputError } from '../errors.js';
import { type Drawn, drawShape } from './draw.js';
import type { SettledChoices } from './options.js';
import { MOST_PATCHES } from './options.js';
import { direction, rectangle } from './shape.js';
import { type Sheet, tidy } from './sheet.js';
import type { CornerTruth } from './truth.js';

export function drawChecker(sheet: Sheet, choices: SettledChoices): Drawn {
  const { white, dark, oversample, angleDeg } = choices;
  const sizePx = choices.sizePx ?? Math.max(32, Math.ceil(Math.max(sheet.width, sheet.height) / 40));
  const [axisX, axisY] = sheet.rig.mount.axisPx;
  const { nx, ny } = direction(angleDeg);
  const at = (u: number, v: number) => [axisX + u * nx - v * ny, axisY + u * ny + v * nx] as const;
  // the board's own coordinates of the frame's corners say how far it must reach
  const frame = [-0.5, sheet.width - 0.5].flatMap((x) =>
    [-0.5, sheet.height - 0.5].map((y) => {
      const [dx, dy] = [x - axisX, y - axisY];
      return [dx * nx + dy * ny, dy * nx - dx * ny] as const;
    }),
  );
  const cells = (values: number[]) =>
    [Math.floor(Math.min(...values) / sizePx), Math.ceil(Math.max(...values) / sizePx)] as const;
  const [fromU, toU] = cells(frame.map(([u]) => u));
  const [fromV, toV] = cells(frame.map(([, v]) => v));
  const count = (toU - fromU) * (toV - fromV);
  if (count > 2 * MOST_PATCHES) throw tooMany(count, sizePx);
  const plane = sheet.blank(oversample, white);
  const corners: CornerTruth[] = [];
  for (let row = fromV; row < toV; row++) {
    for (let column = fromU; column < toU; column++) {
      const [x, y] = at((column + 0.5) * sizePx, (row + 0.5) * sizePx);
      if ((row + column) % 2 === 0) drawShape(plane, rectangle(x, y, sizePx, sizePx, angleDeg), dark - white);
      const [cornerX, cornerY] = at(column * sizePx, row * sizePx);
      if (sheet.holds(cornerX, cornerY, sizePx / 2)) corners.push(sheet.place(cornerX, cornerY));
    }
  }
  return { plane, found: { corners, cell: { sizePx: tidy(sizePx), angleDeg: tidy(angleDeg) } } };
}

function tooMany(count: number, sizePx: number): InputError {
  return new InputError({
    key: '--size',
    message: 'the board has too many cells',
    found: `${count} cells of ${sizePx} px`,
    allowed: `up to ${2 * MOST_PATCHES}`,
    advice: 'Choose a larger --size.',
  });
}
