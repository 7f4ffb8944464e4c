import { resolve } from 'node:path';
import type { Command } from 'commander';
import type { ViewedRun } from '../scenarios/page.ts';
import { CAUTION } from '../scenarios/summary.ts';

/** `galehold view`: one HTML file from the results of one or several runs. */
export function registerView(program: Command): void {
  program
    .command('view')
    .summary('put run results into one HTML page')
    .description(
      'Make one HTML page from the results of one or several runs. The page opens from disk, needs no network,\n' +
        'and lets several runs be laid over each other.',
    )
    .argument('<results-folder...>', 'folders that "galehold run" has written, one a run')
    .option('--out <file>', 'the page to write', 'view.html')
    .option('--title <text>', "the page's heading (default: the scenario's title)")
    .addHelpText(
      'after',
      `\nExample:\n  galehold view results/grid-loss-at-crest results/steady-12 --out view.html\n\n${CAUTION}`,
    )
    .action(async (folders: string[], options: { out: string; title?: string }) => {
      const { readStoredResult } = await import('../scenarios/stored-result.ts');
      const runs = await Promise.all(folders.map(readStoredResult));
      nameApart(runs, folders);
      for (const run of runs) for (const sentence of run.missing ?? []) console.error(`${run.name}: ${sentence}`);
      console.log(await writePage(options.out, runs, options.title));
    });
}

/** Gives runs whose folders have the same name the paths that were asked for instead. */
function nameApart(runs: readonly ViewedRun[], folders: readonly string[]): void {
  const names = runs.map(({ name }) => name);
  runs.forEach((run, index) => {
    if (names.indexOf(run.name) !== names.lastIndexOf(run.name)) run.name = folders[index] ?? run.name;
  });
}

/**
 * Writes one page of `runs`, headed `title` (by default the scenario's).
 * @returns where it is, in words
 * @throws InputError where the place cannot be written
 */
export async function writePage(file: string, runs: readonly ViewedRun[], title?: string): Promise<string> {
  const [{ assemblePage }, { readPageTemplate }, { writeAsked }] = await Promise.all([
    import('../scenarios/page.ts'),
    import('./page-template.ts'),
    import('./whole-file.ts'),
  ]);
  const heading = title ?? titleOf(runs.map((run) => run.summary.scenario.title));
  const page = assemblePage(await readPageTemplate(), { title: heading, runs });
  await writeAsked(file, page);
  return `${resolve(file)}  (${(page.length / 1e6).toFixed(1)} MB, opens in any browser)`;
}

function titleOf(titles: readonly string[]): string {
  const distinct = [...new Set(titles)];
  if (distinct.length === 1 && titles.length === 1) return distinct[0] ?? '';
  if (distinct.length === 1) return `${distinct[0]}: ${titles.length} runs`;
  return `${titles.length} runs side by side`;
}
