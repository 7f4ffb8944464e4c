import type { Command } from 'commander';
import { collectSets } from './set-option.ts';

interface Options {
  wind: string;
  rotorSpeed?: string;
  pitch?: string;
  stations: string;
  picture?: string;
  set: string[];
}

/** `galehold blade`: the velocity triangle along the blade at an operating point. */
export function registerBlade(program: Command): void {
  program
    .command('blade')
    .summary('show the flow along the blade at an operating point')
    .description(
      'Show chord, twist, inflow angle, angle of attack, stall margin, velocities and forces along the blade at an\n' +
        'operating point. Rotor speed and pitch that are not given are those of steady operation in that wind.',
    )
    .argument('<turbine-file>', 'the turbine, given by its blade')
    .option('--wind <speed>', 'wind through the rotor', '10 m/s')
    .option('--rotor-speed <speed>', 'such as "12 rpm" (default: steady operation)')
    .option('--pitch <angle>', 'such as "3 deg" (default: steady operation)')
    .option('--stations <n>', 'how many stations to list, 1 to 200', '12')
    .option('--picture <file>', 'draw velocity triangles and angles of attack to an .svg or .html file')
    .option('--set <path=value>', 'change a value of the file (may be repeated)', collectSets, [])
    .addHelpText('after', '\nExample:\n  galehold blade my-turbine.yaml --wind "14 m/s" --picture blade.html')
    .action(async (file: string, options: Options) => {
      const [{ loadTurbine }, { bladeView }, { bladeText }] = await Promise.all([
        import('../scenarios/disk.ts'),
        import('./blade-view.ts'),
        import('./blade-text.ts'),
      ]);
      const turbine = await loadTurbine(file, { set: options.set });
      const view = bladeView(turbine, file, options);
      if (options.picture !== undefined) await draw(view, options.picture);
      console.log(bladeText(view));
      if (options.picture !== undefined) console.log(`\nPicture: ${options.picture}`);
    });
}

async function draw(view: import('./blade-view.ts').BladeView, file: string): Promise<void> {
  const [{ bladePage, bladePicture }, { writeAsked }, { refusal }] = await Promise.all([
    import('./blade-picture.ts'),
    import('./whole-file.ts'),
    import('../scenarios/input-error.ts'),
  ]);
  const ending = /\.(svg|html)$/.exec(file)?.[1];
  if (ending === undefined) throw refusal(file, 'a picture is written to a file that ends in .svg or .html');
  await writeAsked(file, ending === 'svg' ? bladePicture(view) : bladePage(view));
}
