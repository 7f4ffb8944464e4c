#!/usr/bin/env node
import { Command } from 'commander';
import { widenInlining } from '../scenarios/inlining.ts';
import { VERSION } from '../scenarios/version.ts';
import { registerBlade } from './blade.ts';
import { registerDemo } from './demo.ts';
import { EXIT, report } from './exit-code.ts';
import { registerInit } from './init.ts';
import { registerLinearize } from './linearize.ts';
import { registerMargins } from './margins.ts';
import { registerRun } from './run.ts';
import { registerSchema } from './schema.ts';
import { registerTrim } from './trim.ts';
import { registerTune } from './tune.ts';
import { registerView } from './view.ts';
import { registerWind } from './wind.ts';

widenInlining();

const program = new Command('galehold')
  .description(
    'Simulates and tunes the pitch control and the safety chain of a wind turbine:\n' +
      'does the loop hold the rotor through the gust, and does the chain stop it in time?',
  )
  .version(VERSION)
  .exitOverride(({ exitCode }) => process.exit(exitCode === 0 ? EXIT.asExpected : EXIT.badInput))
  .addHelpText(
    'after',
    '\nExample:\n  galehold init my-turbine && cd my-turbine && galehold run 04-operating-gust.yaml',
  );

registerRun(program);
registerTrim(program);
registerLinearize(program);
registerMargins(program);
registerTune(program);
registerBlade(program);
registerWind(program);
registerView(program);
registerSchema(program);
registerInit(program);
registerDemo(program);

// A reader that has seen enough, such as `head`, closes the pipe: not an error.
process.stdout.on('error', ({ code }: NodeJS.ErrnoException) => {
  if (code === 'EPIPE') process.exit(EXIT.asExpected);
});

try {
  await program.parseAsync();
} catch (error) {
  process.exitCode = report(error);
}
