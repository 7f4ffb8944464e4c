import type { Command } from 'commander';
import { collectSets } from './set-option.ts';
import type { WindRange } from './wind-range.ts';

export interface LinearizeOptions extends WindRange {
  set: string[];
  rotor: string;
  csv?: string;
  json?: boolean;
}

/** `galehold linearize`: linear models at the trim points. */
export function registerLinearize(program: Command): void {
  program
    .command('linearize')
    .summary('derive linear models of plant and closed loop at each wind speed')
    .description(
      'Derive dx/dt = A x + B u, y = C x + D u at the trim points by nudging every state and input, with names and SI\n' +
        'units, and list poles, damping, the states that take part, and the zeros from pitch to generator speed. With a\n' +
        'scenario file the closed loop is listed as well: sampling, delay, filters and drive included.',
    )
    .argument('<file>', 'a turbine or a scenario file')
    .option('--set <path=value>', 'override a value, as in "tower.frequency=0.3 Hz" (repeatable)', collectSets, [])
    .option('--rotor <model>', 'surface, or blade_element: azimuth-averaged, with its wake and flap', 'surface')
    .option('--from <speed>', 'lowest wind speed (default: cut-in)')
    .option('--to <speed>', 'highest wind speed (default: cut-out)')
    .option('--step <speed>', 'step of wind speed', '2 m/s')
    .option('--csv <file>', 'write the matrices as CSV, one entry a row')
    .option('--json', 'print models and modes as JSON, in SI units, and nothing else')
    .addHelpText(
      'after',
      '\nExample:\n  galehold linearize 04-operating-gust.yaml --from "12 m/s" --json > models.json',
    )
    .action(async (file: string, options: LinearizeOptions) => {
      const { linearModels } = await import('./linearize-models.ts');
      await linearModels(file, options);
    });
}
