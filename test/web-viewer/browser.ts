/** Headless Chromium for the viewer's tests; where there is none they are skipped, or fail if it is required. */
import { existsSync } from 'node:fs';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type BrowserContext, chromium } from 'playwright-core';

const EXECUTABLE = process.env.GALEHOLD_CHROMIUM ?? '/usr/bin/chromium';
const REQUIRED = process.env.GALEHOLD_REQUIRE_BROWSER === '1';

/** False where Chromium is missing and not required: then says which tests are skipped. */
export function browserPresent(tests: string): boolean {
  if (existsSync(EXECUTABLE) || REQUIRED) return true;
  console.warn(`SKIPPED, no Chromium at ${EXECUTABLE}: ${tests}`);
  return false;
}

export interface TestBrowser {
  context: BrowserContext;
  close(): Promise<void>;
}

/** A browser with a profile of its own. Throws where there is none. */
export async function openBrowser(): Promise<TestBrowser> {
  if (!existsSync(EXECUTABLE))
    throw new Error(`GALEHOLD_REQUIRE_BROWSER is set, but there is no Chromium at ${EXECUTABLE}`);
  const profile = await mkdtemp(join(tmpdir(), 'galehold-browser-'));
  const context = await chromium.launchPersistentContext(profile, {
    executablePath: EXECUTABLE,
    headless: true,
    args: [
      '--headless',
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
  return {
    context,
    async close() {
      await context.close();
      await rm(profile, { recursive: true, force: true });
    },
  };
}
