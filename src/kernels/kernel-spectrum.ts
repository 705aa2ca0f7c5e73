/** Half spectra of real kernels, in the order in which the blur multiplies them. */
import { forward, forwardToLines } from './fft';
import { lineOfNegatives } from './mix';
import { readColumns } from './plane';
import { RE, ROW, panelBytes } from './vector';

/** Bytes of one spectrum: one line of each couple of a line and its line of negatives. Two lines are their own (m = 0, and the one
 * whose lowest frequency is fftHeight/8), which makes one more than half of them. */
export function spectrumBytes(fftWidth: u32, fftHeight: u32): usize {
  return <usize>(fftHeight / 8 + 1) * <usize>fftWidth * ROW;
}

/** Bytes of work space of `kernelSpectrum`. */
export function spectrumScratchBytes(kernelSize: u32, fftHeight: u32): usize {
  return 2 * panelBytes(fftHeight) + onesBytes(kernelSize) + <usize>(fftHeight / 4) * lineBytesOf(kernelSize);
}

@inline
function onesBytes(kernelSize: u32): usize {
  return (<usize>kernelSize * 4 + 63) & ~63;
}

@inline
function lineBytesOf(kernelSize: u32): usize {
  return panelBytes((kernelSize + 3) & ~3);
}

/** The half spectrum of a real kernel, its first sample taken as the origin: line after line in the order of m, each line of
 * fftWidth complex rows as in the blur.
 * @param kernel float32[kernelSize][kernelSize]
 * @param mirror MIRROR_X, MIRROR_Y, both or none: how the kernel is seen
 * @param scratch `spectrumScratchBytes` bytes
 * @param spectrum `spectrumBytes` bytes */
export function kernelSpectrum(
  kernel: usize, kernelSize: u32, mirror: u32, fftWidth: u32, fftHeight: u32, scratch: usize, spectrum: usize,
): void {
  const panel = scratch;
  const work = panel + panelBytes(fftHeight);
  const ones = work + panelBytes(fftHeight);
  const lines = ones + onesBytes(kernelSize);
  const lineBytes = lineBytesOf(kernelSize);
  const stride = <usize>kernelSize << 2;
  for (let i: u32 = 0; i < kernelSize; i++) store<f32>(ones + (<usize>i << 2), 1);
  memory.fill(panel, 0, <usize>kernelSize * ROW);
  for (let x: u32 = 0; x < kernelSize; x += 4) {
    readColumns(kernel, stride, kernelSize, kernelSize, mirror, x, 0, kernelSize, panel + RE, 1, 0);
    forwardToLines(panel, ones, ones, kernelSize, work, fftHeight, lines + <usize>x * ROW, lineBytes);
  }
  for (let m: u32 = 0; m < fftHeight / 4; m++) {
    if (lineOfNegatives(m, fftHeight) < m) continue;
    forward(lines + <usize>m * lineBytes, ones, kernelSize, spectrum, fftWidth);
    spectrum += <usize>fftWidth * ROW;
  }
}
