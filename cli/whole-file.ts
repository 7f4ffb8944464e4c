import { rename, rm, writeFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import { faultText, makeFolders } from '../scenarios/file-fault.ts';
import { refusal } from '../scenarios/input-error.ts';

/** Writes a file whole or not at all. Throws what the file system says. */
export async function writeWholeFile(path: string, content: string | Uint8Array): Promise<void> {
  const draft = `${path}.${process.pid}.part`;
  try {
    await writeFile(draft, content);
    await rename(draft, path);
  } catch (cause) {
    await rm(draft, { force: true });
    throw cause;
  }
}

/** Writes a file that the user asked for, and the folders above it, whole or not at all. Throws InputError where that fails. */
export async function writeAsked(file: string, content: string | Uint8Array): Promise<void> {
  try {
    makeFolders(dirname(resolve(file)));
    await writeWholeFile(file, content);
  } catch (cause) {
    throw refusal(file, `cannot be written: ${faultText(cause)}`);
  }
}
