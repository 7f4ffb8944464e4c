import type { Command } from 'commander';
import { collectSets } from './set-option.ts';

interface Options {
  part: string[];
  turbine?: string;
  duration: string;
  seed: string;
  set: string[];
  plot?: string;
  csv?: string;
  parquet?: string;
  points?: string;
  rate: string;
}

/** `galehold wind`: makes a wind, describes it, plots it, and writes it out. */
export function registerWind(program: Command): void {
  program
    .command('wind')
    .summary('make, describe and plot a wind')
    .description(
      'Make the wind of a scenario, or of parts given here, and say what it is like: statistics, and for turbulence its\n' +
        'spectra and coherence against what they should be. --plot draws it, with the rotor disc in motion.',
    )
    .argument('[scenario-file]', 'the scenario whose wind is meant')
    .option('--part <part>', 'a part of the wind, written as in a scenario (may be repeated)', collectSets, [])
    .option('--turbine <file>', 'the turbine that stands in the parts (default: the shipped one)')
    .option('--duration <time>', 'how long the wind of the parts blows', '600 s')
    .option('--seed <n>', 'seed of the parts', '1')
    .option('--set <path=value>', 'change a value of the scenario (may be repeated)', collectSets, [])
    .option('--plot <file>', 'draw the wind on one HTML page')
    .option('--csv <file>', 'write the wind against time as CSV')
    .option('--parquet <file>', 'write the wind against time as Parquet')
    .option('--points <rings>x<spokes>', 'write the wind at these points of the rotor too, such as 5x12')
    .option('--rate <frequency>', 'rows per second of --csv and --parquet', '20 Hz')
    .addHelpText(
      'after',
      '\nExamples:\n' +
        '  galehold wind 04-operating-gust.yaml --plot gust.html\n' +
        '  galehold wind --part "{ kind: normal_profile, speed: 18 m/s }" \\\n' +
        '    --part "{ kind: normal_turbulence, edition: 4, wind_class: III, turbulence: B, hub_wind: 18 m/s }" \\\n' +
        '    --plot wind.html --parquet wind.parquet --points 5x12',
    )
    .action(async (file: string | undefined, options: Options) => {
      const [{ windOf }, { windStudy }, { windText }] = await Promise.all([
        import('./wind-source.ts'),
        import('./wind-study.ts'),
        import('./wind-text.ts'),
      ]);
      const data = await windOf(file, options);
      const study = windStudy(data);
      if (options.plot !== undefined) await draw(study, options.plot);
      if (options.csv !== undefined || options.parquet !== undefined) await write(data, options);
      console.log(windText(study));
      for (const written of [options.plot, options.csv, options.parquet]) {
        if (written !== undefined) console.log(`Written: ${written}`);
      }
    });
}

async function draw(study: import('./wind-study.ts').WindStudy, file: string): Promise<void> {
  const [{ windPage }, { writeAsked }] = await Promise.all([import('./wind-page.ts'), import('./whole-file.ts')]);
  await writeAsked(file, windPage(study));
}

async function write(data: import('../scenarios/load.ts').WindData, options: Options): Promise<void> {
  const [{ windColumns }, { csvText, parquetBytes }, { writeAsked }] = await Promise.all([
    import('./wind-columns.ts'),
    import('../scenarios/results.ts'),
    import('./whole-file.ts'),
  ]);
  const columns = windColumns(data, options);
  if (options.csv !== undefined) await writeAsked(options.csv, csvText(columns));
  if (options.parquet !== undefined) await writeAsked(options.parquet, parquetBytes(columns));
}
