import { Argument, type Command } from 'commander';
import { FILE_KINDS, type FileKind } from '../scenarios/schema/file-kind.ts';

/** `galehold schema`: JSON Schema of the file kinds, for editors that complete and check. */
export function registerSchema(program: Command): void {
  program
    .command('schema')
    .summary('print the JSON Schema of a kind of file')
    .description(
      'Print the JSON Schema of a kind of file, or write the schemas of every kind to a folder. Editors that know ' +
        'JSON Schema then complete keys, show what they mean, and mark mistakes while you type.',
    )
    .addArgument(new Argument('[kind]', 'the kind of file').choices(FILE_KINDS))
    .option('--out <folder>', 'write a file for the kind given, or for every kind, to this folder')
    .addHelpText('after', '\nExamples:\n  galehold schema turbine\n  galehold schema --out schemas')
    .action(async (kind: FileKind | undefined, { out }: { out?: string }, command: Command) => {
      if (out !== undefined) {
        await writeTo(out, kind === undefined ? FILE_KINDS : [kind]);
      } else if (kind !== undefined) {
        const { jsonSchema } = await import('../scenarios/schema/json-schema.ts');
        console.log(JSON.stringify(jsonSchema(kind), null, 2));
      } else {
        command.error(`say which kind of file (${FILE_KINDS.join(', ')}), or where to write them all with --out`, {
          exitCode: 2,
        });
      }
    });
}

async function writeTo(folder: string, kinds: readonly FileKind[]): Promise<void> {
  const [{ writeSchemaFiles, writingFault }, { InputError }] = await Promise.all([
    import('./schema-file.ts'),
    import('../scenarios/input-error.ts'),
  ]);
  try {
    for (const path of await writeSchemaFiles(folder, kinds)) console.log(path);
  } catch (cause) {
    throw new InputError([{ file: folder, line: 0, column: 0, message: writingFault(cause) }]);
  }
}
