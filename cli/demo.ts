import { join } from 'node:path';
import type { Command } from 'commander';

/** `galehold demo`: the shipped scenarios, told as one story. */
export function registerDemo(program: Command): void {
  program
    .command('demo')
    .summary('run the shipped scenarios of the invented demo turbine')
    .description(
      'Run every shipped scenario of the invented turbine Skerry 3.6-130 and put the results into one HTML page. Some\n' +
        'scenarios are meant to break their limits and say so.',
    )
    .option('--out <folder>', 'where results and page go', 'results/demo')
    .addHelpText('after', '\nExample:\n  galehold demo --out my-demo')
    .action(async ({ out }: { out: string }) => {
      const [{ runScenarios }, { shippedScenarios }] = await Promise.all([
        import('./scenario-runs.ts'),
        import('../scenarios/disk.ts'),
      ]);
      const files = await shippedScenarios();
      process.exitCode = await runScenarios(files, { set: [], out, view: join(out, 'view.html') });
    });
}
