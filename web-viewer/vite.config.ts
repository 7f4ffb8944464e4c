import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { defineConfig, type Plugin } from 'vite';

const here = dirname(fileURLToPath(import.meta.url));
const plotly = createRequire(import.meta.url).resolve('plotly.js-dist');

/**
 * The distributed plotly.js registers every kind of trace it knows: maps, 3-D, pies. A view draws lines only, which its
 * core knows unregistered. Without the list, and with its lazy modules marked as free of effects, the bundler can leave
 * out what no line needs: three quarters of the page.
 */
function linesOnlyPlotly(): Plugin {
  return {
    name: 'lines-only-plotly',
    transform(code, id) {
      if (id !== plotly) return undefined;
      const registration = /Plotly\.register\(\[[\s\S]*?\]\);/;
      const lazyModule = /^( {2}var \w+ = )(__commonJS|__esm)\(/gm;
      if (!registration.test(code) || !lazyModule.test(code)) {
        throw new Error('plotly.js-dist is laid out differently from what web-viewer/vite.config.ts expects');
      }
      return { code: code.replace(registration, '').replace(lazyModule, '$1/* @__PURE__ */ $2('), map: null };
    },
  };
}

const plotlyLicense = readFileSync(join(dirname(plotly), 'LICENSE'), 'utf8');

export default defineConfig({
  root: here,
  plugins: [linesOnlyPlotly()],
  build: {
    outDir: join(here, '../dist/web-viewer'),
    emptyOutDir: true,
    target: 'es2022',
    chunkSizeWarningLimit: 1500,
    lib: {
      entry: join(here, 'page.ts'),
      formats: ['iife'],
      name: 'galehold',
      fileName: () => 'page.js',
      cssFileName: 'page',
    },
    rolldownOptions: { output: { postBanner: `/*! This page carries plotly.js:\n${plotlyLicense}*/` } },
  },
});
