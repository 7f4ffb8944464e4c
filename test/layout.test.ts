/** Who may import whom, and what the repository may hold. */
import { execFileSync } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, normalize } from 'node:path';
import { describe, expect, it } from 'vitest';
import { VERSION } from '../scenarios/version.ts';

const FOLDERS = ['sim', 'controllers', 'tuning', 'scenarios', 'cli', 'web-viewer'] as const;
type Folder = (typeof FOLDERS)[number];

/** Folders whose files a folder may import besides its own. */
const ALLOWED: Record<Folder, readonly Folder[]> = {
  controllers: [],
  sim: ['controllers'],
  tuning: ['sim', 'controllers', 'scenarios'],
  scenarios: ['sim', 'controllers'],
  cli: ['sim', 'controllers', 'tuning', 'scenarios'],
  'web-viewer': ['sim', 'controllers', 'tuning', 'scenarios'],
};

interface Import {
  from: string;
  /** A path in the repository, or a package's name. */
  to: string;
  typeOnly: boolean;
}

function sources(folder: string): string[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.ts') && !name.endsWith('.d.ts') && !name.endsWith('vite.config.ts'))
    .map((name) => join(folder, name));
}

function importsOf(file: string): Import[] {
  const text = readFileSync(file, 'utf8');
  const found = text.matchAll(
    /^(import|export)(?<type> type)?[^'";]*?from '(?<to>[^']+)'|import\('(?<lazy>[^']+)'\)/gms,
  );
  return [...found].map(({ groups = {} }) => {
    const to = groups.to ?? groups.lazy ?? '';
    return {
      from: file,
      to: to.startsWith('.') ? normalize(join(dirname(file), to)) : to,
      typeOnly: groups.type !== undefined,
    };
  });
}

const imports = FOLDERS.flatMap((folder) => sources(folder)).flatMap(importsOf);

describe('A source file', () => {
  it.each(FOLDERS)('in %s imports only from the folders that it may know', (folder) => {
    const known = [folder, ...ALLOWED[folder]];
    const wrong = imports.filter(
      ({ from, to }) =>
        from.startsWith(`${folder}/`) &&
        FOLDERS.some((other) => to.startsWith(`${other}/`)) &&
        !known.some((other) => to.startsWith(`${other}/`)),
    );
    expect(wrong).toEqual([]);
  });

  it('in sim knows the control side by its contract only', () => {
    const wrong = imports.filter(
      ({ from, to }) => from.startsWith('sim/') && to.startsWith('controllers/') && to !== 'controllers/contract.ts',
    );
    expect(wrong).toEqual([]);
  });

  it('in controllers needs no package at all', () => {
    const wrong = imports.filter(({ from, to }) => from.startsWith('controllers/') && !to.startsWith('controllers/'));
    expect(wrong).toEqual([]);
  });

  it('that the browser needs imports no Node module, however far down', () => {
    const reached = new Set<string>();
    const follow = (file: string): void => {
      if (reached.has(file)) return;
      reached.add(file);
      for (const { from, to, typeOnly } of imports) if (from === file && !typeOnly && to.endsWith('.ts')) follow(to);
    };
    for (const file of sources('web-viewer')) follow(file);
    for (const file of ['scenarios/run.ts', 'scenarios/load.ts', 'scenarios/page.ts']) follow(file);
    expect(reached.size).toBeGreaterThan(60);
    const wrong = imports.filter(({ from, to, typeOnly }) => reached.has(from) && !typeOnly && to.startsWith('node:'));
    expect(wrong).toEqual([]);
  });
});

describe('The repository', () => {
  it('has one version', () => {
    expect(JSON.parse(readFileSync('package.json', 'utf8')).version).toBe(VERSION);
  });

  it('keeps its lock file free of download addresses', () => {
    expect(readFileSync('package-lock.json', 'utf8')).not.toContain('"resolved"');
  });

  it('holds at its top level what the design names and tool settings', () => {
    const tracked = execFileSync('git', ['ls-files'], { encoding: 'utf8' }).trim().split('\n');
    expect([...new Set(tracked.map((path) => path.split('/')[0]))].sort()).toEqual(
      [
        ...FOLDERS,
        '.ci',
        '.gitignore',
        'DEVELOPERS.md',
        'LICENSE',
        'README.md',
        'biome.json',
        'package-lock.json',
        'package.json',
        'test',
        'tsconfig.json',
        'tsconfig.test.json',
        'vitest.config.ts',
      ].sort(),
    );
  });
});
