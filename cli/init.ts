import type { Command } from 'commander';

/** `galehold init`: a project folder that a user can edit. */
export function registerInit(program: Command): void {
  program
    .command('init')
    .summary('start a project folder with files to edit')
    .description(
      'Write a fresh project: an invented turbine, its controller and protection, a few scenarios, a short README, and ' +
        'JSON Schemas so that editors complete and check the files. The folder must be new or empty.',
    )
    .argument('<folder>', 'where to write it')
    .addHelpText(
      'after',
      '\nExample:\n  galehold init my-turbine && cd my-turbine && galehold run 04-operating-gust.yaml',
    )
    .action(async (folder: string) => {
      const { createProject } = await import('./project.ts');
      for (const path of await createProject(folder)) console.log(path);
    });
}
