import { describe, expect, it } from 'vitest';
import { toBands } from '../../../src/files/pictures/bands.js';
import { faultOf } from './folder.js';

const plane = (...values: number[]) => Float32Array.from(values);
const colour = { width: 2, height: 1, planes: [plane(0.25, 1), plane(0.5, 1), plane(0.75, 1)] };
const grey = { width: 2, height: 1, planes: [plane(0.25, 1)] };

describe('toBands', () => {
  it('gives a mono scene to every band, without a copy', () => {
    const { planes } = toBands(grey, ['red', 'green', 'blue']);
    expect(planes).toHaveLength(3);
    for (const band of planes) expect(band).toBe(grey.planes[0]);
    expect(toBands(grey, ['mono']).planes[0]).toBe(grey.planes[0]);
  });

  it('gives a colour scene to its bands, in the order of the camera', () => {
    expect(toBands(colour, ['red', 'green', 'blue']).planes).toEqual(colour.planes);
    expect(toBands(colour, ['blue', 'red']).planes.map((band) => band[0])).toEqual([0.75, 0.25]);
  });

  it('gives its luminance to a mono camera, in the caller’s memory, and leaves the scene alone', () => {
    const own = [plane(9, 9)];
    const { planes } = toBands(colour, ['mono'], { allocate: () => own });
    expect(planes[0]).toBe(own[0]);
    expect(planes[0][0]).toBeCloseTo(0.2126 * 0.25 + 0.7152 * 0.5 + 0.0722 * 0.75, 7);
    expect(planes[0][1]).toBeCloseTo(1, 7); // white stays white
    expect(colour.planes[0][0]).toBe(0.25);
  });

  it('refuses a band that no colour belongs to', async () => {
    const fault = await faultOf(() => toBands(colour, ['red', 'infrared']));
    expect(fault).toMatchObject({ found: 'infrared', allowed: 'mono, or red, green and blue' });
  });
});
