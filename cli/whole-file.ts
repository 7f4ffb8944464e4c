import { rename, rm, writeFile } from 'node:fs/promises';

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
