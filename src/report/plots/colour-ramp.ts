/** Colours for a share from 0 to 1: from dark to light for all eyes and in grey print. */

const STEPS = 100;

/** 101 colours, `#rrggbb`, for 0, 0.01, ... 1.
 *
 * Source: the map "viridis" of S. van der Walt and N. Smith (2015), made so that equal steps look equal, also to colour-blind eyes and in
 * grey (cited from memory), as the plotting library has it. */
export function colourRamp(): Promise<string[]> {
  return rampOf('viridis');
}

/** 101 colours from -1 to 1: orange where something falls short, purple where there is room, pale between.
 *
 * Source: the scheme "PuOr" of C. A. Brewer's ColorBrewer, made to be told apart by colour-blind eyes (cited from memory), as the plotting
 * library has it. */
export async function twoSidedRamp(): Promise<string[]> {
  return (await rampOf('puor')).reverse();
}

async function rampOf(scheme: 'viridis' | 'puor'): Promise<string[]> {
  const { scale } = await import('@observablehq/plot');
  const { apply } = scale({ color: { type: 'linear', domain: [0, STEPS], scheme } })!;
  return Array.from({ length: STEPS + 1 }, (_, i) => hex(apply(i)));
}

/** The colour of a share; shares outside of 0..1 take the nearest. */
export function rampColour(ramp: readonly string[], share: number): string {
  return ramp[Math.round((ramp.length - 1) * Math.min(1, Math.max(0, share)))];
}

/** Black or white, whichever can be read better on a colour; one of the two always reaches 4.5:1.
 * Source: relative luminance and contrast ratio of the W3C's Web Content Accessibility Guidelines 2.1 (from memory) */
export function inkOn(colour: string): '#000' | '#fff' {
  const [r, g, b] = [1, 3, 5].map((at) => linear(Number.parseInt(colour.slice(at, at + 2), 16) / 255));
  const luminance = 0.2126 * r + 0.7152 * g + 0.0722 * b;
  return (luminance + 0.05) ** 2 > 1.05 * 0.05 ? '#000' : '#fff';
}

function linear(code: number): number {
  return code <= 0.04045 ? code / 12.92 : ((code + 0.055) / 1.055) ** 2.4;
}

function hex(colour: string): string {
  if (colour.startsWith('#')) return colour;
  const parts = colour.match(/\d+/g)!.map((part) => Number(part).toString(16).padStart(2, '0'));
  return `#${parts.join('')}`;
}
