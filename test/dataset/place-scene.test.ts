import { expect, test } from 'vitest';
import { placeScene } from '../../src/dataset/place-scene.js';
import { fitToSensor } from '../../src/files/pictures/index.js';
import { CounterRandom } from '../../src/numeric/random.js';
import { view } from './views.js';

/** Even noise in three planes. */
function speckle(width: number, height: number) {
  const random = new CounterRandom(5, 0);
  random.start(0);
  const planes = [0, 1, 2].map(() => new Float32Array(width * height).map(() => random.uniform()));
  return { width, height, planes };
}

test.each([
  ['smaller', 200, 120],
  ['larger', 500, 401],
  ['as large', 320, 240],
])('a scene that is %s than the sensor lies as in a rendering', (_name, width, height) => {
  const scene = speckle(width, height);
  const { pose } = view({ scene });
  const whole = { x: 0, y: 0, width: 320, height: 240 };
  for (const oversample of [1, 3]) {
    const placed = placeScene(scene, pose, whole, oversample);
    const fitted = fitToSensor(scene, 320 * oversample, 240 * oversample);
    expect([placed.width, placed.height]).toEqual([fitted.width, fitted.height]);
    // bytes, since a comparison of so many numbers one by one takes long
    for (const [at, plane] of placed.planes.entries())
      expect(bytesOf(plane).equals(bytesOf(fitted.planes[at]))).toBe(true);
  }
});

test('a part of a frame is that part of the whole', () => {
  const scene = speckle(150, 150);
  const { pose } = view({ scene, draw: { scale: 1.7 } });
  const whole = placeScene(scene, pose, { x: -8, y: -9, width: 340, height: 260 }, 2);
  const part = placeScene(scene, pose, { x: 30, y: 41, width: 50, height: 20 }, 2);
  for (let y = 0; y < 40; y++) {
    const from = (y + 2 * 50) * whole.width + 2 * 38;
    // the ends of the range are looked up in the part alone: ringing may be clipped otherwise, in float32
    const row = part.planes[0].subarray(y * 100, (y + 1) * 100);
    const same = whole.planes[0].subarray(from, from + 100);
    for (const [x, value] of row.entries()) expect(Math.abs(value - same[x])).toBeLessThan(0.02);
  }
});

test('pixel on pixel is copied, with its edge past its border', () => {
  const scene = speckle(20, 10);
  const { pose } = view({ scene, placement: { cover: 'none' } });
  const { planes } = placeScene(scene, pose, { x: 148, y: 110, width: 24, height: 20 }, 1);
  for (let y = 0; y < 20; y++) {
    for (let x = 0; x < 24; x++) {
      const column = Math.min(19, Math.max(0, x - 2));
      const row = Math.min(9, Math.max(0, y - 5));
      expect(planes[2][y * 24 + x]).toBe(scene.planes[2][row * 20 + column]);
    }
  }
});

test.each([1, 2, 3])('%i quarter turns', (quarterTurns) => {
  const scene = speckle(6, 4);
  const { pose } = view({ scene, placement: { cover: 'none' }, draw: { quarterTurns } });
  const [width, height] = quarterTurns === 2 ? [6, 4] : [4, 6];
  const frame = { x: 160 - width / 2, y: 120 - height / 2, width, height };
  const { planes } = placeScene(scene, pose, frame, 1);
  const turnedOnce = (plane: Float32Array, w: number, h: number) =>
    Float32Array.from({ length: w * h }, (_, at) => plane[(h - 1 - (at % h)) * w + Math.floor(at / h)]);
  let expected = scene.planes[0];
  for (let turn = 0, [w, h] = [6, 4]; turn < quarterTurns; turn++, [w, h] = [h, w])
    expected = turnedOnce(expected, w, h);
  expect(planes[0]).toEqual(expected);
});

function bytesOf({ buffer, byteOffset, byteLength }: Float32Array): Buffer {
  return Buffer.from(buffer, byteOffset, byteLength);
}
