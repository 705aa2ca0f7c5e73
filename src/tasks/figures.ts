/** What a rule finds at a place. */

/** A rule's figure in one band. */
export interface BandFigure {
  value: number;
  /** The same along the radius and across it, where the figure has a direction. */
  tangential?: number;
  sagittal?: number;
  /** The direction that counts, in degrees from the outward radius. */
  directionDeg?: number;
}

/** A rule's figure in the worst band. */
export interface Figure extends BandFigure {
  band: string;
}

/** The figure of the band in which it is worst.
 * @param isWorse whether the first value is worse than the second */
export function worstBand(
  figures: readonly Figure[],
  isWorse: (value: number, than: number) => boolean,
): Figure {
  return figures.reduce((worst, figure) => (isWorse(figure.value, worst.value) ? figure : worst));
}

/** (value - limit) / limit, its sign such that more is better. */
export function marginAtLeast(value: number, limit: number): number {
  return (value - limit) / limit;
}

/** The same where less is better. */
export function marginAtMost(value: number, limit: number): number {
  return (limit - value) / limit;
}
