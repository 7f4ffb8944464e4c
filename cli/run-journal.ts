import { appendFileSync, existsSync, readFileSync } from 'node:fs';
import { dirname, resolve } from 'node:path';
import { faultText, makeFolders } from '../scenarios/file-fault.ts';
import { refusal } from '../scenarios/input-error.ts';

/**
 * Finished work by key, one JSON line each, appended whole. A line that a kill has cut is left out when the journal is
 * read again; the work behind it is done anew.
 */
export class RunJournal<T> {
  readonly file: string;
  private readonly known = new Map<string, T>();

  /** @throws InputError where the file cannot be read or written */
  constructor(file: string) {
    this.file = file;
    try {
      makeFolders(dirname(resolve(file)));
      const text = existsSync(file) ? readFileSync(file, 'utf8') : '';
      for (const line of text.split('\n')) this.remember(line);
      appendFileSync(file, text === '' || text.endsWith('\n') ? '' : '\n');
    } catch (cause) {
      throw refusal(file, `cannot serve as a journal: ${faultText(cause)}`);
    }
  }

  get size(): number {
    return this.known.size;
  }

  find(key: string): T | undefined {
    return this.known.get(key);
  }

  add(key: string, value: T): void {
    this.known.set(key, value);
    appendFileSync(this.file, `${JSON.stringify({ key, value })}\n`);
  }

  private remember(line: string): void {
    if (line === '') return;
    try {
      const { key, value } = JSON.parse(line);
      if (typeof key === 'string' && value !== undefined) this.known.set(key, value);
    } catch {
      // Cut by a kill.
    }
  }
}
