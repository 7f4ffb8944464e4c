import { type Command, Option } from 'commander';
import { collectSets } from './set-option.ts';

export interface RunOptions {
  set: string[];
  out: string;
  integrator?: 'odex' | 'runge-kutta';
  json?: boolean;
  view?: string;
}

/** `galehold run`: simulates scenarios, judges their limits, writes their results. */
export function registerRun(program: Command): void {
  program
    .command('run')
    .summary('simulate scenarios and judge their limits')
    .description(
      'Simulate one or many scenarios, judge their limits, and write a results folder for each: summary.json,\n' +
        'channels.csv and channels.parquet. Exit code: 0 every verdict is as its scenario expects, 1 one is not,\n' +
        '2 unusable input, 3 a simulation could not go on.',
    )
    .argument('<scenario...>', 'scenario files')
    .option('--set <path=value>', 'override a value, as in "wind.0.speed=16 m/s" (repeatable)', collectSets, [])
    .option('--out <folder>', 'where the results go, a folder a scenario', 'results')
    .addOption(
      new Option('--integrator <kind>', 'use this integrator whatever the scenario says').choices([
        'odex',
        'runge-kutta',
      ]),
    )
    .option('--view <file>', 'also put all results into one HTML page')
    .option('--json', 'print the summaries as JSON and nothing else')
    .addHelpText(
      'after',
      '\nExamples:\n' +
        '  galehold run 04-operating-gust.yaml --view view.html\n' +
        '  galehold run 08-*.yaml 09-*.yaml --set "turbine.pitch_drive.backup.rows.0.1=5" --out results/weak-backup\n' +
        '\nResults on trips and stops are an engineering aid; protection settings are decided by licensed engineers.',
    )
    .action(async (files: string[], options: RunOptions) => {
      const { runScenarios } = await import('./scenario-runs.ts');
      process.exitCode = await runScenarios(files, options);
    });
}
