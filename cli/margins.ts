import type { Command } from 'commander';
import { collectSets } from './set-option.ts';
import type { WindRange } from './wind-range.ts';

export interface MarginsOptions extends WindRange {
  set: string[];
  rotor: string;
  measured?: boolean;
  plot?: string;
  csv?: string;
  json?: boolean;
}

/** `galehold margins`: how far the pitch loop is from swinging. */
export function registerMargins(program: Command): void {
  program
    .command('margins')
    .summary('list the pitch loop’s margins at each wind speed')
    .description(
      'List gain, phase, delay and modulus margin, bandwidth and the least damping of the pitch loop at each wind speed of\n' +
        'the rated region, exactly for the sampled loop: law, filters, sampling, delay and drive included. --measured takes\n' +
        'them from a simulation instead, with a multisine added to the pitch demand: for any control law.',
    )
    .argument('<scenario>', 'a scenario file: its turbine and its controller count')
    .option(
      '--set <path=value>',
      'override a value, as in "controller.laws.0.integral=0.005" (repeatable)',
      collectSets,
      [],
    )
    .option('--rotor <model>', 'surface, or blade_element: azimuth-averaged, with its wake and flap', 'surface')
    .option('--from <speed>', 'lowest wind speed (default: cut-in)')
    .option('--to <speed>', 'highest wind speed (default: cut-out)')
    .option('--step <speed>', 'step of wind speed', '1 m/s')
    .option('--measured', 'measure the loop in a simulation')
    .option('--plot <file>', 'put the margins into one HTML page')
    .option('--csv <file>', 'write the table as CSV')
    .option('--json', 'print the margins as JSON, in SI units, and nothing else')
    .addHelpText('after', '\nExample:\n  galehold margins 04-operating-gust.yaml --step "2 m/s" --measured')
    .action(async (file: string, options: MarginsOptions) => {
      const { marginsTable } = await import('./margins-table.ts');
      await marginsTable(file, options);
    });
}
