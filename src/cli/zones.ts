/** `zones`: contrast by field zone. */
import { Command } from 'commander';
import {
  type CommonTexts,
  commonOptions,
  GROUP,
  grouped,
  type RigTexts,
  readRigValues,
  readThreads,
  rigOptions,
} from './common-options.js';
import { checkOutputs, readDestination } from './destinations.js';
import { htmlOption, readHtmlFile } from './html-option.js';
import { endOnInterrupt } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, deliverText, paintFor, print, warn } from './output.js';

interface ZonesTexts extends RigTexts, CommonTexts {
  fields?: string;
  lpPerMm?: string;
  csv?: true | string;
  html?: string;
}

export function zonesCommand(): Command {
  const command = new Command('zones')
    .usage('--rig FILE ...')
    .summary('contrast by field zone: MTF along and across the radius, Strehl ratio, distortion, best focus')
    .description(
      'Prints what the lens does in each zone of the field: MTF along and across the radius, of the lens and with the camera, Strehl ' +
        'ratio, wavefront RMS, distortion, and the sensor shift of best focus.',
    );
  for (const option of rigOptions()) command.addOption(option);
  command
    .addOption(
      grouped(
        GROUP.zones,
        '--fields <list>',
        'field points: a number is h (1 at full_field_mm) along +x, 0.7@90 is h = 0.7 at 90 degrees from +x toward +y; or a place ' +
          'on the sensor: axis, top, bottom, left, right, top_left, top_right, bottom_left, bottom_right (default: ' +
          'axis,top,right,top_right, or all nine places where a tilt or a shifted axis breaks the symmetry)',
      ),
    )
    .addOption(
      grouped(
        GROUP.zones,
        '--lp-per-mm <list>',
        'frequencies on the sensor in line pairs a millimetre (default: 1/8, 1/4 and 1/2 of a cycle a pixel)',
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--csv [file]',
        'the figures as CSV, on stdout in place of the table, or in the file',
      ),
    );
  command.addOption(htmlOption('map, curves, PSFs and tables'));
  for (const option of commonOptions('the figures')) command.addOption(option);
  return command
    .addHelpText('after', '\nExample:\n  foreglass zones --rig tags.rig.yaml --fields axis,0.7,top_right')
    .action(async (texts: ZonesTexts) => {
      const { parseFieldPoint } = await import('../optics/field-points.js');
      const values = new OptionValues();
      const { rig: rigFile, overrides } = readRigValues(values, texts);
      const fields = values
        .items('--fields', texts.fields)
        ?.map((item) => values.attempt('--fields', () => parseFieldPoint(item)))
        .filter((field) => field !== undefined);
      const lpPerMm = values.numbers('--lp-per-mm', texts.lpPerMm, { min: 0, aboveMin: true });
      readThreads(values, texts);
      const json = readDestination(values, '--json', texts.json);
      const csv = readDestination(values, '--csv', texts.csv);
      const page = readHtmlFile(values, texts.html);
      await checkOutputs(values, { '--rig': rigFile }, { '--json': json, '--csv': csv, '--html': page });
      values.check();

      const [{ loadRig }, { zones }] = await Promise.all([
        import('../files/load-rig.js'),
        import('../jobs/zones.js'),
      ]);
      const rig = loadRig(rigFile, overrides);
      const report = zones(rig, { fields, lpPerMm });

      endOnInterrupt(); // not before: nothing was written yet, and a handler would have to wait for the job
      warn(report.warnings, texts.quiet);
      await deliver(json, report);
      if (csv.kind !== 'none') {
        const { zoneCsv } = await import('../report/zone-csv.js');
        await deliverText(csv, zoneCsv(report));
      }
      if (page.kind === 'file') {
        const { zonesHtml } = await import('../jobs/zones-html.js');
        await deliverText(page, await zonesHtml(rig, report));
      }
      if (json.kind === 'stdout' || csv.kind === 'stdout') return;
      const { zoneTable } = await import('../report/zone-table.js');
      await print(zoneTable(report, await paintFor(process.stdout)));
    });
}
