/** `zones --html`: the page that shows a rig zone by zone. */
import { psfSamples } from '../imaging/psf-samples.js';
import { frameMap } from '../optics/frame-map.js';
import type { Rig } from '../optics/rig.js';
import { zoneCurves } from '../optics/zone-curves.js';
import type { ZonesReport } from '../optics/zones.js';

/** The page as a text of HTML, one file that loads nothing: MTF against image height, frequency and focus, a map of contrast, PSFs and
 * distortion over the frame, and all figures as tables.
 * @param report what `zones` made of the same rig */
export async function zonesHtml(rig: Rig, report: ZonesReport): Promise<string> {
  // loaded where a page is wanted: the plotting library takes a tenth of a second
  const [{ zonesPage }, { psfUses }] = await Promise.all([
    import('../report/html/zones-page.js'),
    import('../report/html/frame-section.js'),
  ]);
  const map = frameMap(
    rig,
    report.zones[0].mtf.map(({ lpPerMm }) => lpPerMm),
  );
  const psfs = psfSamples(rig, psfUses(map).own);
  return zonesPage({ rig, report, curves: zoneCurves(rig, report), map, psfs });
}
