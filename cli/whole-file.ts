import { rename, rm, writeFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import { faultText, makeFolders } from '../scenarios/file-fault.ts';
import { refusal } from '../scenarios/input-error.ts';

/** Writes a text file whole or not at all. Throws what the file system says. */
export async function writeWholeFile(path: string, text: string): Promise<void> {
  const draft = `${path}.${process.pid}.part`;
  try {
    await writeFile(draft, text);
    await rename(draft, path);
  } catch (cause) {
    await rm(draft, { force: true });
    throw cause;
  }
}

/** Writes a text file that the user asked for, and the folders above it, whole or not at all. Throws InputError where that fails. */
export async function writeAsked(file: string, text: string): Promise<void> {
  try {
    makeFolders(dirname(resolve(file)));
    await writeWholeFile(file, text);
  } catch (cause) {
    throw refusal(file, `cannot be written: ${faultText(cause)}`);
  }
}
