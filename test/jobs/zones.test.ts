import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { zones } from '../../src/jobs/zones.js';
import { zonesOf } from '../../src/optics/zones.js';
import { sampleRig } from '../optics/samples.js';

describe('zones', () => {
  const rig = sampleRig({ waves: { W040: 0.3, W131: 0.5, W222: 0.4 } });

  it('gives the figures of the optics, as they are asked for', () => {
    expect(zones(rig)).toEqual(zonesOf(rig));
    const options = { fields: ['0.7@90', 'axis'], lpPerMm: [30] };
    expect(zones(rig, options)).toEqual(zonesOf(rig, options));
    expect(zones(rig, { fields: undefined, lpPerMm: undefined })).toEqual(zonesOf(rig));
  });

  it('passes refusals on', () => {
    expect(() => zones(rig, { lpPerMm: [-1] })).toThrow(InputError);
  });
});
