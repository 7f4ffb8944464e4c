import type { Command } from 'commander';
import { collectSets } from './set-option.ts';

export interface TrimOptions {
  set: string[];
  from?: string;
  to?: string;
  step: string;
  plot?: string;
  csv?: string;
  json?: boolean;
}

/** `galehold trim`: the steady operating points over the wind range. */
export function registerTrim(program: Command): void {
  program
    .command('trim')
    .summary('list the steady operating points over the wind range')
    .description(
      'List the steady operating point at each wind speed: rotor speed, pitch, tip-speed ratio, coefficients, torque,\n' +
        'power, thrust, tower deflection, the margin to stall, the slopes of torque, power and thrust, and the gain\n' +
        'schedules that fit them. A turbine file is trimmed at its best tip-speed ratio below rated power; a\n' +
        'scenario file on the torque curve of its controller.',
    )
    .argument('<file>', 'a turbine or a scenario file')
    .option('--set <path=value>', 'override a value, as in "rotor.radius=66 m" (repeatable)', collectSets, [])
    .option('--from <speed>', 'lowest wind speed (default: cut-in)')
    .option('--to <speed>', 'highest wind speed (default: cut-out)')
    .option('--step <speed>', 'step of wind speed', '1 m/s')
    .option('--plot <file>', 'put the curves into one HTML page')
    .option('--csv <file>', 'write the table as CSV')
    .option('--json', 'print the points as JSON, in SI units, and nothing else')
    .addHelpText('after', '\nExample:\n  galehold trim turbines/skerry-3.6-130.yaml --step "0.5 m/s" --plot trim.html')
    .action(async (file: string, options: TrimOptions) => {
      const { trimTable } = await import('./trim-table.ts');
      await trimTable(file, options);
    });
}
