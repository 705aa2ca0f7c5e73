/** `render`: what the camera will record of a scene. */
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
import { checkOutputs, fileDestination, readDestination } from './destinations.js';
import { interruptible } from './interrupt.js';
import { OptionValues } from './option-values.js';
import { deliver, print, warn } from './output.js';
import { openProgressBar } from './progress.js';

interface RenderTexts extends RigTexts, CommonTexts {
  out?: string;
  linear?: boolean;
  raw?: string;
  record?: string;
  sheet?: string;
  sceneLinear?: boolean;
  oversample: string;
  tolerance: string;
  kernelTolerance: string;
  seed: string;
  engine: string;
}

export function renderCommand(): Command {
  const command = new Command('render')
    .summary('what the camera will record of a scene')
    .description(
      'Sends a scene through the lens and the camera of the rig and writes the picture that the camera records. The scene stands for ' +
        'the ideal image: its centre goes to the middle of the sensor, and it is resized to cover it.',
    )
    .usage('SCENE --rig FILE --out IMAGE ...')
    .argument('<SCENE>', 'PNG, JPEG, TIFF or WebP, 8 or 16 bit, sRGB unless --scene-linear is given');
  for (const option of rigOptions()) command.addOption(option);
  command
    .addOption(
      grouped(GROUP.scene, '--scene-linear', 'the numbers of the scene are linear in light, not sRGB'),
    )
    .addOption(
      grouped(GROUP.scene, '--oversample <k>', 'blur on a grid of k x k samples a pixel, 1 to 16').default(
        '1',
        '1',
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--out <image>',
        'the picture: .png, .tif, .jpg or .webp, 8-bit sRGB unless --linear is given',
      ),
    )
    .addOption(
      grouped(GROUP.output, '--linear', 'write --out as 16 bits a value, linear in light (.png or .tif)'),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--raw <file>',
        "the sensor's own numbers before development, 16-bit (.png or .tif)",
      ),
    )
    .addOption(
      grouped(
        GROUP.output,
        '--record <file>',
        'how the picture was made: rig, seed, accuracy, times (.json or .yaml)',
      ),
    )
    .addOption(
      grouped(
        GROUP.accuracy,
        '--tolerance <share>',
        'largest error that blending PSFs may cause at a pixel, as a share of full scale',
      ).default('0.004', '0.004, one 8-bit step'),
    )
    .addOption(
      grouped(
        GROUP.accuracy,
        '--kernel-tolerance <share>',
        "largest share of a PSF's energy that may fall outside its kernel",
      ).default('0.005', '0.005'),
    )
    .addOption(
      grouped(GROUP.running, '--seed <number>', 'seed of the noise: same seed, same picture').default(
        '1',
        '1',
      ),
    );
  command.addOption(
    grouped(
      GROUP.output,
      '--sheet <file>',
      'a sheet to judge by eye (.png, .svg): scene, picture and PSF side by side at the axis, half-way out, at an edge and in a corner',
    ),
  );
  command.addOption(
    grouped(
      GROUP.running,
      '--engine <name>',
      'what computes: the compiled kernels, or plain float64 to hold them against, slower by far',
    )
      .choices(['simd', 'reference'])
      .default('simd'),
  );
  for (const option of commonOptions('the record')) command.addOption(option);
  return command
    .addHelpText(
      'after',
      '\nExample:\n  foreglass render scenes/tags/crate-tags.png --rig tags.rig.yaml --out tags.png',
    )
    .action(async (scene: string, texts: RenderTexts) => {
      const values = new OptionValues();
      const { rig: rigFile, overrides } = readRigValues(values, texts);
      const json = readDestination(values, '--json', texts.json);
      const options = {
        scene: values.path('SCENE', scene) ?? '',
        out: values.path('--out', texts.out),
        linear: texts.linear,
        raw: values.path('--raw', texts.raw),
        recordFile: values.path('--record', texts.record),
        sheet: values.path('--sheet', texts.sheet),
        sceneLinear: texts.sceneLinear,
        oversample: values.number('--oversample', texts.oversample, { min: 1, max: 16, integer: true }),
        tolerance: values.number('--tolerance', texts.tolerance, { min: 0, aboveMin: true, max: 1 }),
        kernelTolerance: values.number('--kernel-tolerance', texts.kernelTolerance, {
          min: 0,
          aboveMin: true,
          max: 1,
        }),
        seed: values.number('--seed', texts.seed, { min: 0, integer: true }),
        engine: texts.engine as 'simd' | 'reference',
        threads: readThreads(values, texts),
      };
      refuseNoPicture(values, texts);
      await checkOutputs(
        values,
        { SCENE: scene, '--rig': rigFile },
        {
          '--out': fileDestination(options.out),
          '--raw': fileDestination(options.raw),
          '--record': fileDestination(options.recordFile),
          '--sheet': fileDestination(options.sheet),
          '--json': json,
        },
      );
      values.check();

      const { record } = await interruptible(async (signal) => {
        const [{ loadRig }, { render }, bar] = await Promise.all([
          import('../files/load-rig.js'),
          import('../jobs/render.js'),
          openProgressBar(texts.quiet === true),
        ]);
        try {
          const rig = loadRig(rigFile, overrides);
          return await render({ ...options, rig, signal, onProgress: (progress) => bar.show(progress) });
        } finally {
          bar.end();
        }
      });

      warn(record.warnings, texts.quiet);
      await deliver(json, record);
      if (texts.quiet || json.kind === 'stdout') return;
      const { renderSummary } = await import('../report/render-summary.js');
      await print(renderSummary(record, [options.out, options.raw, options.recordFile, options.sheet]));
    });
}

function refuseNoPicture(values: OptionValues, { out, raw, sheet, linear }: RenderTexts): void {
  if (out === undefined && raw === undefined && sheet === undefined) {
    values.add({
      key: '--out',
      message: 'no picture is asked for',
      advice: 'Name one with --out IMAGE, --raw FILE or --sheet FILE.',
    });
  }
  if (linear && out === undefined) {
    values.add({ key: '--linear', message: 'goes with --out only; --raw is linear by itself' });
  }
}
