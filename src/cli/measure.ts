/** `measure`: what a chart image shows. */
import { Command } from 'commander';
import { type CommonTexts, commonOptions, GROUP, grouped, readThreads } from './common-options.js';
import { checkOutputs, readDestination } from './destinations.js';
import { htmlOption, readHtmlFile } from './html-option.js';
import { endOnInterrupt } from './interrupt.js';
import { OptionValues, parseNumber } from './option-values.js';
import { deliver, deliverText, paintFor, print, warn } from './output.js';

interface MeasureTexts extends CommonTexts {
  truth?: string;
  region?: string[];
  flat?: string[];
  rig?: string;
  record?: string;
  linear?: boolean;
  cyclesPerPixel?: string;
  lpPerMm?: string;
  csv?: true | string;
  html?: string;
}

export function measureCommand(): Command {
  const command = new Command('measure')
    .usage('IMAGE --truth FILE ...')
    .summary('what a chart image shows: SFR at each slanted edge, shift of each dot, noise of flat fields')
    .description(
      'Measures a picture of a chart: the spatial frequency response (slanted edges after ISO 12233), 10-90 % width and 50 % frequency ' +
        'of each edge; the place of each disc, and from them distortion and lateral colour; mean, noise and SNR of flat fields. Any picture ' +
        'with a slanted edge will do (--region). Frequencies count along the normal of an edge.',
    )
    .argument('<IMAGE>', 'PNG, TIFF, JPEG or WebP, 8 or 16 bit');
  const repeated = (name: string, description: string) =>
    grouped(GROUP.zones, name, description).argParser((value: string, before: string[] = []) => [
      ...before,
      value,
    ]);
  command
    .addOption(
      grouped(GROUP.zones, '--truth <file>', 'truth file of the chart: its edges and discs are measured'),
    )
    .addOption(repeated('--region <x,y,w,h>', 'pixels that one slanted edge crosses; may be given again'))
    .addOption(repeated('--flat <x,y,w,h>', 'pixels of even light, for noise and SNR; may be given again'))
    .addOption(
      grouped(
        GROUP.zones,
        '--cycles-per-pixel <list>',
        'frequencies of the SFR in cycles a pixel, up to 1 (default: 0.05 to 0.5 in steps of 0.05)',
      ),
    )
    .addOption(
      grouped(GROUP.zones, '--lp-per-mm <list>', 'the same in line pairs a millimetre on the sensor'),
    )
    .addOption(
      grouped(
        GROUP.picture,
        '--linear',
        'the numbers are linear in light (default: what the record or the PNG file says, else sRGB)',
      ),
    )
    .addOption(
      grouped(
        GROUP.picture,
        '--record <file>',
        'record that render wrote with the picture: encoding, raw levels and rig',
      ),
    )
    .addOption(
      grouped(
        GROUP.picture,
        '--rig <file>',
        'rig file: line pairs a mm, fields, where to look, and the figures to be expected',
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--csv [file]',
        'the edges as CSV, without edges the discs or flat fields, on stdout in place of the table, or in the file',
      ),
    );
  command.addOption(htmlOption('response curves of the edges, distortion, flat fields and tables'));
  for (const option of commonOptions('the figures')) command.addOption(option);
  return command
    .addHelpText(
      'after',
      '\nExample:\n  foreglass measure picture.png --truth edges.truth.json --rig tags.rig.yaml',
    )
    .action(async (image: string, texts: MeasureTexts) => {
      const values = new OptionValues();
      const json = readDestination(values, '--json', texts.json);
      const csv = readDestination(values, '--csv', texts.csv);
      readThreads(values, texts);
      const frequency = { min: 0, aboveMin: true };
      const options = {
        image: values.path('IMAGE', image) ?? '',
        truth: values.path('--truth', texts.truth),
        regions: readRects(values, '--region', texts.region),
        flats: readRects(values, '--flat', texts.flat),
        recordFile: values.path('--record', texts.record),
        linear: texts.linear,
        cyclesPerPixel: values.numbers('--cycles-per-pixel', texts.cyclesPerPixel, { ...frequency, max: 1 }),
        lpPerMm: values.numbers('--lp-per-mm', texts.lpPerMm, frequency),
      };
      const rigFile = values.path('--rig', texts.rig);
      const inputs = {
        IMAGE: image,
        '--truth': options.truth,
        '--record': options.recordFile,
        '--rig': rigFile,
      };
      const named = Object.entries(inputs).filter(
        (input): input is [string, string] => input[1] !== undefined,
      );
      const page = readHtmlFile(values, texts.html);
      await checkOutputs(values, Object.fromEntries(named), {
        '--json': json,
        '--csv': csv,
        '--html': page,
      });
      values.check();

      const [{ loadRig }, { measure }] = await Promise.all([
        import('../files/load-rig.js'),
        import('../jobs/measure.js'),
      ]);
      const rig = rigFile === undefined ? undefined : loadRig(rigFile);
      const report = await measure({ ...options, rig });

      endOnInterrupt(); // not before: nothing was written yet, and a handler would have to wait for the job
      warn(report.warnings, texts.quiet);
      await deliver(json, report);
      if (csv.kind !== 'none') {
        const { measureCsv } = await import('../report/measure-csv.js');
        await deliverText(csv, measureCsv(report));
      }
      if (page.kind === 'file') {
        const { measureHtml } = await import('../jobs/html.js');
        await deliverText(page, await measureHtml(report, rig));
      }
      if (json.kind === 'stdout' || csv.kind === 'stdout') return;
      const { measureTable } = await import('../report/measure-table.js');
      await print(measureTable(report, await paintFor(process.stdout)));
    });
}

interface Rect {
  x: number;
  y: number;
  width: number;
  height: number;
}

/** `10,20,80,60`: first column, first row, width, height. */
function readRects(values: OptionValues, name: string, texts: readonly string[] = []): Rect[] {
  return texts.flatMap((text) => {
    const [x, y, width, height, ...more] = text.split(',').map(parseNumber);
    const numbers = [x, y, width, height].filter(
      (part) => part !== undefined && Number.isInteger(part) && part >= 0,
    );
    if (numbers.length === 4 && more.length === 0 && width! > 0 && height! > 0)
      return [{ x: x!, y: y!, width: width!, height: height! }];
    values.add({
      key: name,
      message: 'not a region',
      found: `'${text}'`,
      allowed: 'first column, first row, width and height in whole pixels, such as 400,300,80,60',
    });
    return [];
  });
}
