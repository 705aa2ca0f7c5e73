/** The frame with a grid in it, straight and as distortion bends it. */
import type { DistortionGrid } from '../../optics/zone-curves.js';
import { drawPlot } from './draw-plot.js';
import { FAINT, INK, SERIES } from './theme.js';

export function distortionGridPlot({ factor, frameMm, lines }: DistortionGrid): Promise<string> {
  const [width, height] = frameMm;
  const bent = lines.flatMap(({ bent: points }) => points);
  const reach = (axis: 0 | 1) =>
    1.02 * Math.max(frameMm[axis] / 2, ...bent.map((point) => Math.abs(point[axis])));
  const [halfX, halfY] = [reach(0), reach(1)];
  const margins = { left: 46, right: 14, top: 14, bottom: 40 };
  const widthPx = 300;
  const drawnPx = widthPx - margins.left - margins.right;
  return drawPlot({
    title: 'Distortion as a grid',
    description:
      factor === 0
        ? `A grid over the frame of ${width.toFixed(2)} by ${height.toFixed(2)} mm; there is no distortion.`
        : `A grid over the frame of ${width.toFixed(2)} by ${height.toFixed(2)} mm, straight and bent by ${factor} times the distortion.`,
    id: 'distortion-grid',
    inPage: true,
    widthPx,
    heightPx: Math.round((drawnPx * halfY) / halfX) + margins.top + margins.bottom,
    plot: (Plot) => ({
      marginTop: margins.top,
      marginLeft: margins.left,
      marginRight: margins.right,
      marginBottom: margins.bottom,
      x: { domain: [-halfX, halfX], label: 'x on the sensor, mm', labelAnchor: 'center', ticks: 6 },
      y: { domain: [halfY, -halfY], label: 'y, mm', labelAnchor: 'top', ticks: 6 },
      marks: [
        ...lines.map(({ ideal }) =>
          Plot.line(ideal, { stroke: FAINT.light, strokeWidth: 1, strokeDasharray: '2 3' }),
        ),
        ...lines.map(({ bent: points }) => Plot.line(points, { stroke: SERIES[0].light, strokeWidth: 1.8 })),
        Plot.rect([0], {
          x1: -width / 2,
          x2: width / 2,
          y1: -height / 2,
          y2: height / 2,
          stroke: INK.light,
          fill: 'none',
        }),
      ],
    }),
  });
}
