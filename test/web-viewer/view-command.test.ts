import { mkdtemp, readdir, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Command } from 'commander';
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { registerView } from '../../cli/view.ts';
import { InputError } from '../../scenarios/input-error.ts';
import { writeResult } from '../../scenarios/results.ts';
import { inventRun } from './invented-run.ts';

describe('the view command', () => {
  let parent: string;
  let printed: string[];

  beforeEach(async () => {
    parent = await mkdtemp(join(tmpdir(), 'galehold-view-'));
    printed = [];
    vi.spyOn(console, 'log').mockImplementation((line: string) => printed.push(line));
    vi.spyOn(console, 'error').mockImplementation((line: string) => printed.push(line));
  });

  afterEach(async () => {
    vi.restoreAllMocks();
    await rm(parent, { recursive: true, force: true });
  });

  async function view(...words: string[]): Promise<void> {
    const program = new Command().exitOverride();
    registerView(program);
    await program.parseAsync(['view', ...words], { from: 'user' });
  }

  function store(name: string): string {
    const folder = join(parent, name);
    writeResult(folder, inventRun({ name }));
    return folder;
  }

  test('puts several results into one file that holds them all, and says where it is', async () => {
    const out = join(parent, 'view.html');
    await view(store('one'), store('two'), '--out', out, '--title', 'One & two');
    const html = await readFile(out, 'utf8');
    expect(html).toContain('<title>One &amp; two</title>');
    expect(html).toContain('"name":"one"');
    expect(html).toContain('"name":"two"');
    expect(html).not.toMatch(/<(script|link|img)[^>]*(src|href)="(?!data:)/);
    expect(printed.join('\n')).toContain(out);
  });

  test('keeps runs from folders of one name apart', async () => {
    const out = join(parent, 'view.html');
    const [before, after] = [store('before/gust'), store('after/gust')];
    await view(before, after, '--out', out);
    const html = await readFile(out, 'utf8');
    expect(html).toContain(`"name":${JSON.stringify(before)}`);
    expect(html).toContain(`"name":${JSON.stringify(after)}`);
  });

  test('weighs less than 1.5 MB for a minute of one run', async () => {
    const out = join(parent, 'view.html');
    await view(store('one'), '--out', out);
    expect((await readFile(out)).length).toBeLessThan(1.5e6);
  });

  test('leaves nothing behind where a result cannot be used', async () => {
    const out = join(parent, 'view.html');
    await expect(view(store('one'), join(parent, 'nowhere'), '--out', out)).rejects.toBeInstanceOf(InputError);
    expect(await readdir(parent)).toEqual(['one']);
  });

  test('leaves nothing behind where the page cannot be written', async () => {
    const folder = store('one');
    const out = join(folder, 'summary.json', 'view.html');
    await expect(view(folder, '--out', out)).rejects.toThrow(`${out}: cannot be written: a part of the path is a file`);
    expect(await readdir(parent)).toEqual(['one']);
  });

  test('makes the folder that the page is to lie in', async () => {
    const out = join(parent, 'pages', 'view.html');
    await view(store('one'), '--out', out);
    expect(await readFile(out, 'utf8')).toContain('</html>');
  });

  test('leaves no draft behind where a folder has the name of the page', async () => {
    const folder = store('one');
    await expect(view(folder, '--out', folder)).rejects.toThrow(`${folder}: cannot be written`);
    expect(await readdir(parent)).toEqual(['one']);
  });
});
