/** `derive`: the coefficients of a lens from its surfaces. */
import { Command } from 'commander';
import type { DeriveReport, DeriveResult } from '../jobs/derive.js';
import { type CommonTexts, commonOptions, GROUP, grouped, readThreads } from './common-options.js';
import { checkOutputs, type Destination, fileDestination, readDestination } from './destinations.js';
import { htmlOption, readHtmlFile } from './html-option.js';
import { endOnInterrupt } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { paintFor, print, warn } from './output.js';

interface DeriveTexts extends CommonTexts {
  wavelengths?: string;
  fields?: string;
  bestFit?: boolean;
  out?: string;
  plot?: string;
  csv?: true | string;
  html?: string;
}

export function deriveCommand(): Command {
  const command = new Command('derive')
    .usage('PRESCRIPTION ...')
    .summary('the coefficients of a lens from its surfaces, and how far to trust them')
    .description(
      'Traces a lens that is given by its surfaces: first-order properties, what each surface contributes to the third-order sums, the ' +
        'coefficients at each wavelength, and how much of the exact wavefront they explain, zone by zone. The lens part that --out ' +
        'writes is what a rig names as lens: FILE. (A rig may also name the surfaces themselves: lens: { prescription: FILE }.)',
    )
    .argument('<PRESCRIPTION>', 'file with the surfaces of the lens');
  command
    .addOption(
      grouped(
        GROUP.derive,
        '--wavelengths <list>',
        "wavelengths in nm at which the coefficients are traced, beside the lens's own (default: 400 to 700 in steps of 25, on to 1000 " +
          'for a lens made for longer waves)',
      ),
    )
    .addOption(
      grouped(
        GROUP.derive,
        '--fields <list>',
        'field points of the exact check and of the fit, 1 at full field (default: 0,0.3,0.5,0.7,0.8,0.9,1)',
      ),
    )
    .addOption(
      grouped(
        GROUP.derive,
        '--best-fit',
        'fit the five terms and defocus to the exact wavefront in place of the sums: for lenses that balance higher orders',
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--out <file>',
        'the lens part for a rig: JSON if its name ends in .json, else YAML',
      ),
    )
    .addOption(grouped(GROUP.output, '--plot <file>', 'bars of what each surface contributes (.svg)'))
    .addOption(
      grouped(
        GROUP.output,
        '--csv [file]',
        'what each surface contributes as CSV, on stdout in place of the tables, or in the file',
      ),
    );
  command.addOption(htmlOption('bars of the surfaces, what the terms explain, colour and tables'));
  for (const option of commonOptions('the figures')) command.addOption(option);
  return command
    .addHelpText('after', '\nExample:\n  foreglass derive three-element.lens.yaml --out derived.lens.yaml')
    .action(async (prescription: string, texts: DeriveTexts) => {
      const values = new OptionValues();
      const options = {
        wavelengthsNm: values.numbers('--wavelengths', texts.wavelengths, { min: 100, max: 20000 }),
        fields: values.numbers('--fields', texts.fields, { min: 0 }),
        bestFit: texts.bestFit,
      };
      readThreads(values, texts);
      const file = values.path('PRESCRIPTION', prescription) ?? '';
      const outputs = {
        '--out': fileDestination(values.path('--out', texts.out)),
        '--plot': readPlotFile(values, texts.plot),
        '--csv': readDestination(values, '--csv', texts.csv),
        '--html': readHtmlFile(values, texts.html),
        '--json': readDestination(values, '--json', texts.json),
      };
      await checkOutputs(values, { PRESCRIPTION: file }, outputs);
      values.check();

      const { derive } = await import('../jobs/derive.js');
      const result = derive(file, options);

      endOnInterrupt(); // not before: nothing was written yet, and a handler would have to wait for the job
      warn(result.report.warnings, texts.quiet);
      await deliverAll(outputs, file, result);
      if (outputs['--json'].kind === 'stdout' || outputs['--csv'].kind === 'stdout') return;
      const { deriveTable } = await import('../report/derive-table.js');
      await print(deriveTable(result.report, await paintFor(process.stdout)));
    });
}

function readPlotFile(values: OptionValues, given: string | undefined): Destination {
  const path = values.path('--plot', given);
  if (path !== undefined && !path.toLowerCase().endsWith('.svg'))
    values.add({
      key: '--plot',
      message: 'the file has no ending of a plot',
      found: `'${path}'`,
      allowed: '.svg',
    });
  return fileDestination(path);
}

/** Makes what is asked for and nothing else, writes the files together, and prints what goes to stdout. */
async function deliverAll(
  outputs: Record<'--out' | '--plot' | '--csv' | '--html' | '--json', Destination>,
  prescription: string,
  { report, lens }: DeriveResult,
): Promise<void> {
  const make = {
    '--out': async (path: string) => {
      const [{ lensPartText }, { wrapText }] = await Promise.all([
        import('../files/lens-part.js'),
        import('../report/text.js'),
      ]);
      const notes = lensNotes(prescription, report).map((note) => wrapText(note, NOTE_WIDTH).join('\n'));
      return lensPartText(path, lens, notes);
    },
    '--plot': async () => {
      const { surfaceBars } = await import('../report/plots/surface-bars.js');
      return surfaceBars(report);
    },
    '--csv': async () => {
      const { surfacesCsv } = await import('../report/surfaces-csv.js');
      return surfacesCsv(report);
    },
    '--html': async () => {
      const { deriveHtml } = await import('../jobs/html.js');
      return deriveHtml(report);
    },
    '--json': async (path: string) => {
      const { dataText } = await import('../files/write-data.js');
      return dataText(path, report);
    },
  } as const;
  const files: { path: string; data: string }[] = [];
  for (const [name, output] of Object.entries(outputs) as [keyof typeof make, Destination][]) {
    if (output.kind === 'file') files.push({ path: output.path, data: await make[name](output.path) });
    if (output.kind === 'stdout') await print(await make[name]('.json'));
  }
  if (files.length === 0) return;
  const { writeAllWhole } = await import('../files/write-whole.js');
  await writeAllWhole(files);
}

const NOTE_WIDTH = 98;

/** What the lens part says of itself. */
function lensNotes(prescription: string, { method, warnings }: DeriveReport): string[] {
  const source =
    method === 'sums' ? 'third-order sums' : 'the five terms and defocus fitted to the exact wavefront';
  return [
    `Derived from ${prescription}: ${source}.`,
    "Relative illumination holds for the lens's own f-number.",
    ...warnings,
  ];
}
