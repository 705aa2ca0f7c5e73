/** The colour in which a band is drawn. */
import { SERIES, type Tone } from './theme.js';

const TONES: Readonly<Record<string, Tone>> = { red: SERIES[1], green: SERIES[2], blue: SERIES[0] };

export function bandTone(band: string): Tone {
  return TONES[band] ?? SERIES[0];
}
