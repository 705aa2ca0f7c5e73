/** The frame, and the part of it in which a task is met. */
import { drawPlot } from './draw-plot.js';
import { INK, PAGE, SERIES } from './theme.js';

export interface MetRegion {
  /** From the optical axis, + right and + down, in mm. */
  frame: { left: number; right: number; top: number; bottom: number };
  /** Radius of the region about the axis; 0 for none. */
  radiusMm: number;
  /** The zones that were judged. */
  zones: readonly { name: string; xMm: number; yMm: number; met: boolean }[];
  description: string;
}

export function metRegionPlot({ frame, radiusMm, zones, description }: MetRegion): Promise<string> {
  const { left, right, top, bottom } = frame;
  const margins = { left: 46, right: 16, top: 16, bottom: 42 };
  const widthPx = 400;
  const across = widthPx - margins.left - margins.right;
  const down = Math.round((across * (bottom - top)) / (right - left));
  const circle = Array.from({ length: 181 }, (_, i) => {
    const angle = (2 * Math.PI * i) / 180;
    return [radiusMm * Math.cos(angle), radiusMm * Math.sin(angle)] as [number, number];
  });
  const shown = zones.filter(
    ({ xMm, yMm }) => xMm >= left - 1e-9 && xMm <= right + 1e-9 && yMm >= top - 1e-9 && yMm <= bottom + 1e-9,
  );
  const middle = 0.5 * (left + right);
  return drawPlot({
    title: 'The frame and where the task is met',
    description,
    id: 'met-region',
    inPage: true,
    widthPx,
    heightPx: down + margins.top + margins.bottom,
    plot: (Plot) => ({
      marginTop: margins.top,
      marginBottom: margins.bottom,
      marginLeft: margins.left,
      marginRight: margins.right,
      x: { domain: [left, right], label: 'x on the sensor, mm', labelAnchor: 'center', ticks: 6 },
      y: { domain: [bottom, top], label: 'y, mm', labelAnchor: 'top', ticks: 6 },
      marks: [
        ...(radiusMm > 0
          ? [
              Plot.line(circle, {
                fill: SERIES[0].light,
                fillOpacity: 0.22,
                stroke: SERIES[0].light,
                strokeWidth: 2,
                clip: true,
              }),
            ]
          : []),
        Plot.rect([0], { x1: left, x2: right, y1: top, y2: bottom, stroke: INK.light, fill: 'none' }),
        Plot.dot(shown, {
          x: 'xMm',
          y: 'yMm',
          r: 6,
          symbol: ({ met }: { met: boolean }) => (met ? 'circle' : 'times'),
          stroke: ({ met }: { met: boolean }) => (met ? SERIES[0].light : SERIES[1].light),
          strokeWidth: 2.5,
          fill: 'none',
        }),
        // names of zones on the rim stand inside of the frame
        ...(['start', 'end'] as const).flatMap((textAnchor) =>
          [-13, 0, 13].map((dy) =>
            Plot.text(
              shown.filter(
                ({ xMm, yMm }) =>
                  (xMm > middle ? 'end' : 'start') === textAnchor && inward(yMm, top, bottom) === dy,
              ),
              {
                x: 'xMm',
                y: 'yMm',
                text: 'name',
                dx: textAnchor === 'start' ? 11 : -11,
                dy,
                textAnchor,
                stroke: PAGE.light,
                strokeWidth: 4,
                fill: INK.light,
              },
            ),
          ),
        ),
      ],
    }),
  });
}

function inward(yMm: number, top: number, bottom: number): number {
  const rim = 0.05 * (bottom - top);
  return yMm < top + rim ? 13 : yMm > bottom - rim ? -13 : 0;
}
