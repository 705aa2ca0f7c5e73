/** The part of the stop that vignetting leaves open for a field point, and how to integrate over it. */
import { gaussLegendre } from '../numeric/gauss-legendre.js';
import type { FieldTracer } from './opd.js';

/** Half-plane spokes (the other half mirrors them) and rings. Rings integrate rho^22, spokes cos^47, without
 * error; where vignetting puts corners into the outline, 24 spokes leave an area off by some 0.2 %. */
const SPOKES = 24;
const RINGS = 6;

/** Places in the stop over its radius, m along the field and s >= 0 across it, with weights that sum to 1. */
export interface PupilSamples {
  m: Float64Array;
  s: Float64Array;
  weight: Float64Array;
}

export interface ClearPupil {
  /** Open share of the stop's area. */
  share: number;
  /** Area of the beam in `FieldTracer.lightCoordinates`: proportional to the light that an even, diffuse
   * object sends from here through the lens. */
  light: number;
  samples: PupilSamples;
}

/** Find the open part of the stop: along the meridian first, then along spokes from the middle of what is
 * open there. It is taken to be one piece that its middle sees all of, which holds for what the round rims of
 * surfaces leave.
 * @returns undefined where no light gets through
 */
export function clearPupil(tracer: FieldTracer): ClearPupil | undefined {
  const middle = openMiddle(tracer);
  if (middle === undefined) return undefined;
  const edge = new Float64Array(SPOKES);
  const across = new Float64Array(SPOKES);
  const along = new Float64Array(SPOKES);
  let area = 0;
  for (let j = 0; j < SPOKES; j++) {
    const angle = spokeAngle(j);
    edge[j] = openReach(tracer, middle, Math.cos(angle), Math.sin(angle));
    const probe = edge[j] * DRAWN_IN;
    tracer.passes(middle + probe * Math.cos(angle), probe * Math.sin(angle));
    const coordinates = tracer.lightCoordinates;
    across[j] = coordinates.across;
    along[j] = coordinates.along;
    area += (edge[j] ** 2 * Math.PI) / SPOKES; // both halves
  }
  return {
    share: area / Math.PI,
    light: mirroredPolygonArea(across, along),
    samples: samplesWithin(middle, edge, area),
  };
}

function spokeAngle(j: number): number {
  return ((j + 0.5) * Math.PI) / SPOKES;
}

/** Middle of the open stretch of the meridian; 0 where both its ends are open. */
function openMiddle(tracer: FieldTracer): number | undefined {
  if (tracer.passes(DRAWN_IN, 0) && tracer.passes(-DRAWN_IN, 0)) return 0;
  const steps = 40;
  const open: number[] = [];
  for (let i = 0; i <= steps; i++) {
    const m = DRAWN_IN * ((2 * i) / steps - 1);
    if (tracer.passes(m, 0)) open.push(m);
  }
  return open.length === 0 ? undefined : (open[0] + open[open.length - 1]) / 2;
}

/** The rim is probed just inside, so that rounding cannot cut a beam at the very edge that it fills. */
const DRAWN_IN = 1 - 1e-9;

/** How far the open part reaches from (middle, 0) along (cos, sin), by bisection to 1e-6. */
function openReach(tracer: FieldTracer, middle: number, cos: number, sin: number): number {
  const reach = (outer: number) => tracer.passes(middle + outer * cos, outer * sin);
  const rim = -middle * cos + Math.sqrt(1 - (middle * sin) ** 2);
  if (reach(rim * DRAWN_IN)) return rim;
  let open = 0;
  let closed = rim;
  while (closed - open > 1e-6) {
    const half = (open + closed) / 2;
    if (reach(half)) open = half;
    else closed = half;
  }
  return open;
}

/** Gauss's rule in the square of the radius along each spoke. */
function samplesWithin(middle: number, edge: Float64Array, area: number): PupilSamples {
  const { nodes, weights } = gaussLegendre(RINGS);
  const samples = {
    m: new Float64Array(SPOKES * RINGS),
    s: new Float64Array(SPOKES * RINGS),
    weight: new Float64Array(SPOKES * RINGS),
  };
  for (let j = 0; j < SPOKES; j++) {
    const angle = spokeAngle(j);
    for (let i = 0; i < RINGS; i++) {
      const at = j * RINGS + i;
      const radius = edge[j] * Math.sqrt((1 + nodes[i]) / 2);
      samples.m[at] = middle + radius * Math.cos(angle);
      samples.s[at] = radius * Math.sin(angle);
      samples.weight[at] = ((weights[i] / 2) * edge[j] ** 2 * Math.PI) / SPOKES / area;
    }
  }
  return samples;
}

/** Area of the polygon through points (x, y) and their mirror images (-x, y). */
function mirroredPolygonArea(x: Float64Array, y: Float64Array): number {
  const last = x.length - 1;
  // the shoelace formula: the mirrored half adds what the first half does, and two edges join a point with
  // its own mirror image
  let area = x[last] * y[last] - x[0] * y[0];
  for (let j = 0; j < last; j++) area += x[j] * y[j + 1] - x[j + 1] * y[j];
  return Math.abs(area);
}
