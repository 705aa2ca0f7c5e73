import { describe, expect, test } from 'vitest';
import { rigWith } from '../../src/dataset/rig-values.js';
import { loadRigFile } from '../../src/files/load-rig.js';
import { RIG, useFolder } from '../files/packhouse.js';

const folder = useFolder();
const base = (text = RIG) => {
  const path = folder.write('a.rig.yaml', text);
  return { path, file: loadRigFile(path) };
};

describe('a rig with other values', () => {
  test('at the paths of its keys', () => {
    const { lens, camera, mount } = rigWith(base(), [
      { key: 'lens.waves.W131', value: 2.5 },
      { key: 'camera.sensor.white_e', value: 4000 },
      { key: 'mount.sensor_tilt_deg[1]', value: 0.5 },
      { key: 'mount.axis_px.0', value: 1100 },
      { key: 'lens.colour.axial_um.450', value: 3 },
      { key: 'lens.colour.axial_um.486.1', value: 2 },
    ]);
    expect(lens.waves.W131).toBe(2.5);
    expect(lens.waves.W222).toBe(0.9);
    expect(camera.sensor?.whiteE).toBe(4000);
    expect(mount.sensorTiltDeg).toEqual([0.1, 0.5]);
    expect(mount.axisPx).toEqual([1100, 1000.5]);
    expect(lens.axialUm).toEqual([
      [450, 3],
      [486.1, 2],
      [650, -5],
    ]);
  });

  test('leaves the rig that it comes from as it was', () => {
    const one = base();
    const before = JSON.stringify(one.file);
    rigWith(one, [{ key: 'lens.waves.W131', value: 2.5 }]);
    expect(JSON.stringify(one.file)).toBe(before);
  });

  test('of an axis that is not stated: the other coordinate stays in the middle', () => {
    const text = RIG.replace(/.*axis_px.*\n/, '');
    const { mount } = rigWith(base(text), [{ key: 'mount.axis_px[1]', value: 900 }]);
    expect(mount.axisPx).toEqual([1223.5, 900]);
  });

  test('in percent in place of waves, and back', () => {
    const percent = rigWith(base(), [{ key: 'lens.waves.distortion_percent', value: -2 }]);
    expect(percent.lens.waves.W311).toBeCloseTo((0.02 * 4.6) / (2 * 2.8 * 550e-6), 9);
    const text = RIG.replace('W311: 6', 'distortion_percent: -2');
    expect(rigWith(base(text), [{ key: 'lens.waves.W311', value: 4 }]).lens.waves.W311).toBe(4);
  });

  test('that make none is refused by key', () => {
    expect(() => rigWith(base(), [{ key: 'mount.f_number', value: 2 }])).toThrow(
      "mount.f_number: is below the lens's f-number",
    );
  });
});
