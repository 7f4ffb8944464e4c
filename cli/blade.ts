import type { Command } from 'commander';
import { collectSets } from './set-option.ts';

interface Options {
  time?: string;
  wind: string;
  rotorSpeed?: string;
  pitch?: string;
  stations: string;
  picture?: string;
  set: string[];
}

/** `galehold blade`: velocity triangles along the blade at an operating point, or of each blade at an instant of a run. */
export function registerBlade(program: Command): void {
  program
    .command('blade')
    .summary('show the flow along the blade at an operating point, or along each at an instant of a run')
    .description(
      'Show chord, twist, inflow angle, angle of attack, stall margin, velocities and forces along the blade at an\n' +
        'operating point. Rotor speed and pitch that are not given are those of steady operation in that wind.\n' +
        'With --time, show the air at stations of each blade at that instant of a run with the blade-element rotor.',
    )
    .argument('<turbine-file | results-folder>', 'the turbine, given by its blade; with --time, the results of a run')
    .option('--time <time>', 'the instant of a run, such as "25.2 s"')
    .option('--wind <speed>', 'wind through the rotor', '10 m/s')
    .option('--rotor-speed <speed>', 'such as "12 rpm" (default: steady operation)')
    .option('--pitch <angle>', 'such as "3 deg" (default: steady operation)')
    .option('--stations <n>', 'how many stations to list, 1 to 200', '12')
    .option('--picture <file>', 'draw velocity triangles and angles of attack to an .svg or .html file')
    .option('--set <path=value>', 'change a value of the file (may be repeated)', collectSets, [])
    .addHelpText(
      'after',
      '\nExamples:\n  galehold blade my-turbine.yaml --wind "14 m/s" --picture blade.html\n' +
        '  galehold blade results/16-stuck-blade-in-shear --time "24 s" --picture blades.html',
    )
    .action(async (file: string, options: Options) => {
      if (options.time !== undefined) {
        await showInstant(file, options.time, options.picture);
        return;
      }
      const [{ loadTurbine }, { bladeView }, { bladeText }] = await Promise.all([
        import('../scenarios/disk.ts'),
        import('./blade-view.ts'),
        import('./blade-text.ts'),
      ]);
      const turbine = await loadTurbine(file, { set: options.set });
      const view = bladeView(turbine, file, options);
      if (options.picture !== undefined) {
        const { bladePage, bladePicture } = await import('./blade-picture.ts');
        await draw(options.picture, { svg: () => bladePicture(view), html: () => bladePage(view) });
      }
      console.log(bladeText(view));
      if (options.picture !== undefined) console.log(`\nPicture: ${options.picture}`);
    });
}

async function showInstant(folder: string, time: string, picture: string | undefined): Promise<void> {
  const [{ bladeInstant, instantText }, { instantPage, instantPicture }] = await Promise.all([
    import('./blade-instant.ts'),
    import('./blade-instant-picture.ts'),
  ]);
  const instant = await bladeInstant(folder, time);
  if (picture !== undefined)
    await draw(picture, { svg: () => instantPicture(instant), html: () => instantPage(instant) });
  console.log(instantText(instant));
  if (picture !== undefined) console.log(`\nPicture: ${picture}`);
}

async function draw(file: string, drawings: Record<'svg' | 'html', () => string>): Promise<void> {
  const [{ writeAsked }, { refusal }] = await Promise.all([
    import('./whole-file.ts'),
    import('../scenarios/input-error.ts'),
  ]);
  if (file.endsWith('.svg')) await writeAsked(file, drawings.svg());
  else if (file.endsWith('.html')) await writeAsked(file, drawings.html());
  else throw refusal(file, 'a picture is written to a file that ends in .svg or .html');
}
