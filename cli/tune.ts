import type { Command } from 'commander';
import { collectSets } from './set-option.ts';

interface Common {
  set: string[];
  out: string;
  report?: string;
}

export interface FormulaOptions extends Common {
  frequency: string;
  damping: string;
  at?: string;
  aerodynamicDamping: boolean;
  constantPower: boolean;
  lag: boolean;
}

export interface MarginOptions extends Common {
  sensitivityPeak: string;
  gainMargin: string;
  phaseMargin: string;
  delayMargin: string;
  density: string;
  inertia: string;
  slope: string;
}

export interface ScenarioOptions {
  set: string[];
  out: string;
  report?: string;
  seeds: string;
  budget: string;
  seed: string;
  journal?: string;
  workers?: string;
}

function common(command: Command): Command {
  return command
    .option('--set <path=value>', 'override a value (repeatable)', collectSets, [])
    .option('--out <file>', 'the controller file to write', 'tuned-controller.yaml')
    .option('--report <file>', 'write a report as one HTML page');
}

/** `galehold tune`: gains, schedule and filters that can be defended. */
export function registerTune(program: Command): void {
  const tune = program
    .command('tune')
    .summary('find gains, schedule and filter for the pitch loop, with the reasons')
    .description(
      'Find gains, schedule and filter for the pitch loop; writes a controller file that says how each came about.',
    )
    .addHelpText(
      'after',
      '\nExample:\n  galehold tune formula 04-operating-gust.yaml --frequency 0.5 --report formula.html',
    );

  common(tune.command('formula'))
    .summary('by closed formulas for frequency and damping')
    .description(
      'Gains by the closed formulas for the speed loop, scheduled on the slope of power with pitch.\n' +
        'The terms for aerodynamic damping, constant power and lag are in unless they are left out.',
    )
    .argument('<scenario>', 'a scenario file: its turbine and its controller count')
    .option('--frequency <rate>', 'natural frequency, rad/s', '0.6')
    .option('--damping <ratio>', 'damping ratio', '0.7')
    .option('--at <speed>', 'wind speed at which the formula is met (default: the middle of the rated region)')
    .option('--no-aerodynamic-damping', 'leave out that the rotor’s torque falls with speed')
    .option('--no-constant-power', 'leave out that the generator’s torque falls with speed')
    .option('--no-lag', 'leave out the lags of drive, filter, sensor and sampling')
    .addHelpText(
      'after',
      '\nExample:\n  galehold tune formula 04-operating-gust.yaml --frequency 0.5 --report formula.html',
    )
    .action(async (file: string, options: FormulaOptions) => {
      const { tuneByFormula } = await import('./tune-formula.ts');
      await tuneByFormula(file, options);
    });

  common(tune.command('margin'))
    .summary('the fastest loop that keeps the asked margins')
    .description(
      'The fastest loop at each wind speed that keeps the asked margins over a spread of air density, inertia and slope\n' +
        'on pitch; then the smallest schedule that keeps them at 50 wind speeds.',
    )
    .argument('<scenario>', 'a scenario file: its turbine and its controller count')
    .option('--sensitivity-peak <value>', 'largest sensitivity peak', '2')
    .option('--gain-margin <factor>', 'smallest gain margin', '2')
    .option('--phase-margin <angle>', 'smallest phase margin', '35 deg')
    .option('--delay-margin <time>', 'smallest delay margin', '0.2 s')
    .option('--density <percent>', 'how far the air’s density strays', '10')
    .option('--inertia <percent>', 'how far the inertias stray', '10')
    .option('--slope <percent>', 'how far the slopes on pitch stray', '20')
    .addHelpText('after', '\nExample:\n  galehold tune margin 04-operating-gust.yaml --report margin.html')
    .action(async (file: string, options: MarginOptions) => {
      const { tuneByMargin } = await import('./tune-margin.ts');
      await tuneByMargin(file, options);
    });

  common(tune.command('scenario'))
    .summary('search for the best trades of speed spread, pitch travel and tower load')
    .description(
      'Search over gains and filter by covariance-matrix-adaptation evolution for the best trades of speed spread, pitch\n' +
        'travel and tower load over scenarios and seeds. A run that trips, or breaks a limit, is out. Every simulation goes\n' +
        'into a journal: the same command after an interruption goes on from there, and gives the same answer.',
    )
    .argument('<scenarios...>', 'scenario files with the same turbine and controller')
    .option('--seeds <list>', 'seeds of wind and noise, e.g. 1..4', '1..4')
    .option('--budget <count>', 'number of simulations', '2000')
    .option('--seed <number>', 'seed of the search itself', '1')
    .option('--journal <file>', 'where finished simulations are kept (default: beside --out)')
    .option('--workers <count>', 'number of worker threads (default: one a core)')
    .addHelpText(
      'after',
      '\nExample:\n  galehold tune scenario 17-normal-turbulence.yaml --seeds 1..6 --report search.html',
    )
    .action(async (files: string[], options: ScenarioOptions) => {
      const { tuneByScenario } = await import('./tune-scenario.ts');
      await tuneByScenario(files, options);
    });
}
