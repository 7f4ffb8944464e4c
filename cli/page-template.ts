import { access, readFile } from 'node:fs/promises';
import type { PageTemplate } from '../scenarios/page.ts';

/** Where the built viewer lies, seen from the built command and from its source. */
const PLACES = ['../web-viewer/', '../dist/web-viewer/'].map((place) => new URL(place, import.meta.url));

/** The built viewer's script and style. Throws where it has not been built. */
export async function readPageTemplate(): Promise<PageTemplate> {
  for (const place of PLACES) {
    const script = new URL('page.js', place);
    const style = new URL('page.css', place);
    try {
      await Promise.all([access(script), access(style)]);
    } catch {
      continue;
    }
    return { script: await readFile(script, 'utf8'), style: await readFile(style, 'utf8') };
  }
  throw new Error('the viewer has not been built: run "npm run build" first');
}
