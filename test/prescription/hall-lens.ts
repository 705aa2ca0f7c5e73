/** The packing hall's three-element lens as its file, and the same with a line changed. */
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

export const HALL_LENS = fileURLToPath(
  new URL('../../scenes/packhouse/three-element.lens.yaml', import.meta.url),
);

/** The text of the file with replacements, each of which must be found. */
export function hallLensWith(...changes: readonly (readonly [from: string, to: string])[]): string {
  return changes.reduce(
    (text, [from, to]) => {
      if (!text.includes(from)) throw new Error(`'${from}' is not in the file`);
      return text.replace(from, to);
    },
    readFileSync(HALL_LENS, 'utf8'),
  );
}

/** A lens so steep that rays at the rim of its beam miss surface 2, in line 3. */
export const STEEP_LENS = `surfaces:
  - { stop: true, thickness_mm: 3 }
  - { radius_mm: 6, thickness_mm: 4, glass: { n: 1.5 } }
  - { radius_mm: infinity }
entrance_pupil_mm: 12.5
half_field_deg: 6
`;
