/** How a direction stands to the radius of its field point. */
import { wholeTurn } from './sheet.js';

/** Whether a direction lies nearer to the radius than to its perpendicular, and by how much it is off: -45 to
 * 45 degrees. */
export function againstRadius(normalDeg: number, azimuthDeg: number): { isAlong: boolean; offDeg: number } {
  const turn = wholeTurn(normalDeg - azimuthDeg);
  const quarters = Math.round(turn / 90);
  return { isAlong: quarters % 2 === 0, offDeg: turn - 90 * quarters };
}
