import { describe, expect, it } from 'vitest';
import { darkStyle, FAINT, INK, PAGE, PLOT_CLASS, SERIES } from '../../../src/report/plots/theme.js';

/** Relative luminance of `#rrggbb`. Source: W3C, Web Content Accessibility Guidelines 2.1 (cited from memory). */
function luminance(colour: string): number {
  const [r, g, b] = [1, 3, 5].map((at) => {
    const value = Number.parseInt(colour.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

const contrast = (a: string, b: string) => {
  const [low, high] = [luminance(a), luminance(b)].sort((x, y) => x - y);
  return (high + 0.05) / (low + 0.05);
};

describe('the colours of plots', () => {
  // 4.5 for text, 3 for graphics: the same guidelines, level AA (from memory)
  it.each(['light', 'dark'] as const)('stand out from a %s page', (mode) => {
    for (const tone of [INK, FAINT]) expect(contrast(tone[mode], PAGE[mode])).toBeGreaterThan(4.5);
    for (const tone of SERIES.slice(0, 3)) expect(contrast(tone[mode], PAGE[mode])).toBeGreaterThan(3);
  });

  it('have one dark partner each', () => {
    const tones = [INK, FAINT, PAGE, ...SERIES];
    expect(new Set(tones.map(({ light }) => light)).size).toBe(tones.length);
    expect(new Set(tones.map(({ dark }) => dark)).size).toBe(tones.length);
    const style = darkStyle();
    expect(style).toMatch(/^@media screen and \(prefers-color-scheme: dark\) \{/); // paper stays light
    for (const { light, dark } of tones)
      expect(style).toContain(
        `.${PLOT_CLASS} [fill="${light}"], .${PLOT_CLASS}[fill="${light}"] { fill: ${dark}; }`,
      );
  });
});
