import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/errors.js';
import { checkRigKey } from '../../src/files/rig-keys.js';

describe('checkRigKey', () => {
  it.each([
    'lens.waves.W131',
    'lens.colour.axial_um.486.1',
    'mount.sensor_tilt_deg[1]',
    'camera.sensor.white_e',
    'lens.distortion_percent',
  ])('lets %s pass', (key) => {
    expect(() => checkRigKey(key, '--vary')).not.toThrow();
  });

  it.each([
    ['lens.waves.W13', "Did you mean 'lens.waves.W131'?"],
    ['mount.f_numbr', "Did you mean 'mount.f_number'?"],
    ['lens.name', 'Allowed: the path of a number'],
    ['lens.colour.axial_um.blue', 'Allowed: the path of a number'],
    ['', 'Allowed: the path of a number'],
  ])('refuses %s', (key, words) => {
    expect(() => checkRigKey(key, '--vary')).toThrow(InputError);
    expect(() => checkRigKey(key, '--vary')).toThrow(words);
  });
});
