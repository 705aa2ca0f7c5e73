/** `chart`: a test chart sized for the rig. */
import { Command } from 'commander';
import type { ChartKind } from '../charts/truth.js';
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
import { checkOutputs, fileDestination, readDestination } from './destinations.js';
import { interruptible } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, print } from './output.js';

interface ChartTexts extends RigTexts, CommonTexts {
  out: string;
  truth?: string;
  oversample?: string;
  contrast?: string;
  white?: string;
  grid?: string;
  fields?: string;
  size?: string;
  angle?: string;
  sectors?: string;
  cyclesPerPixel?: string;
}

export function chartCommand(): Command {
  const command = new Command('chart')
    .usage('KIND --rig FILE --out SCENE ...')
    .summary('a test chart sized for the rig: edges, dots, star, bars, checker')
    .description(
      'Draws a test chart at the scale of the sensor, with its truth file: where each part lies and which way it runs. ' +
        'edges: slanted squares, for the SFR along and across the radius. dots: discs, for distortion and lateral colour. ' +
        'star: sectors. bars: groups from coarse to fine. checker: a board of cells. Each sample is the exact mean over its own square; ' +
        'one plane serves all bands.',
    )
    .argument('<KIND>', 'edges, dots, star, bars or checker');
  for (const option of rigOptions()) command.addOption(option);
  const look = (flags: string, description: string) => grouped(GROUP.chart, flags, description);
  command
    .addOption(look('--grid <CxR>', 'patches across and down, such as 7x5 (default: as many as fit well)'))
    .addOption(
      look('--fields <list>', 'patches at these field points in place of a grid: axis,0.5,0.85@30,top_right'),
    )
    .addOption(
      look(
        '--size <px>',
        'side of a square of edges (default: 128), diameter of a dot (default: 24) or a star (default: 360), length of a bar ' +
          '(default: 40), side of a cell (default: 1/40 of the frame), in sensor pixels',
      ),
    )
    .addOption(
      look(
        '--angle <deg>',
        'edges: slant against the radius, 2 to 40 (default: 5); checker: against the pixels, 0 to 45 (default: 0)',
      ),
    )
    .addOption(
      look(
        '--contrast <ratio>',
        'light of the white parts over the dark ones (default: 4 for edges, else 20)',
      ),
    )
    .addOption(look('--white <level>', 'linear light of the white parts, up to 1 (default: 0.8)'))
    .addOption(look('--sectors <pairs>', 'star: pairs of sectors, 4 to 180 (default: 36)'))
    .addOption(
      look(
        '--cycles-per-pixel <list>',
        'bars: frequencies of the groups (default: 0.05,0.1,0.15,0.2,0.3,0.4,0.5)',
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--out <scene>',
        'the scene: .png or .tif, 16 bits, linear in light',
      ).makeOptionMandatory(),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--truth <file>',
        'the truth file (default: beside the scene, as NAME.truth.json)',
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--oversample <k>',
        'k x k samples a pixel, 1 to 16; render with the same number (default: 4)',
      ),
    );
  for (const option of commonOptions('the truth')) command.addOption(option);
  return command
    .addHelpText('after', '\nExample:\n  foreglass chart edges --rig tags.rig.yaml --out edges.png')
    .action(async (kind: string, texts: ChartTexts) => {
      const { parseFieldPoint } = await import('../optics/field-points.js');
      const values = new OptionValues();
      const { rig: rigFile, overrides } = readRigValues(values, texts);
      const json = readDestination(values, '--json', texts.json);
      readThreads(values, texts);
      const out = values.path('--out', texts.out) ?? '';
      const options = {
        kind: kind as ChartKind, // the drawing refuses others
        out,
        truthFile: values.path('--truth', texts.truth),
        oversample: values.number('--oversample', texts.oversample, { min: 1, max: 16, integer: true }),
        contrast: values.number('--contrast', texts.contrast, { min: 1, aboveMin: true }),
        white: values.number('--white', texts.white, { min: 0, aboveMin: true, max: 1 }),
        grid: readGrid(values, texts.grid),
        fields: values
          .items('--fields', texts.fields)
          ?.map((item) => values.attempt('--fields', () => parseFieldPoint(item)))
          .filter((field) => field !== undefined),
        sizePx: values.number('--size', texts.size, { min: 4 }),
        angleDeg: values.number('--angle', texts.angle, { min: 0, max: 45 }),
        sectors: values.number('--sectors', texts.sectors, { min: 4, max: 180, integer: true }),
        cyclesPerPixel: values.numbers('--cycles-per-pixel', texts.cyclesPerPixel, { min: 0.005, max: 1 }),
      };
      const { chart, truthBeside } = await import('../jobs/chart.js');
      await checkOutputs(
        values,
        { '--rig': rigFile },
        {
          '--out': fileDestination(out),
          '--truth': fileDestination(options.truthFile ?? (out === '' ? undefined : truthBeside(out))),
          '--json': json,
        },
      );
      values.check();

      const { loadRig } = await import('../files/load-rig.js');
      const rig = loadRig(rigFile, overrides);
      const { truth, files } = await interruptible((signal) => chart({ ...options, rig, signal }));

      await deliver(json, truth);
      if (texts.quiet || json.kind === 'stdout') return;
      const { chartSummary } = await import('../report/chart-summary.js');
      await print(chartSummary(truth, files, rigFile));
    });
}

/** `7x5`: patches across and down. */
function readGrid(values: OptionValues, text: string | undefined): [number, number] | undefined {
  if (text === undefined) return undefined;
  const parts = /^(\d+)x(\d+)$/i.exec(text.trim());
  if (parts !== null) return [Number(parts[1]), Number(parts[2])];
  values.add({
    key: '--grid',
    message: 'not a number of patches across and down',
    found: `'${text}'`,
    allowed: 'two whole numbers with an x between them, such as 7x5',
  });
  return undefined;
}
