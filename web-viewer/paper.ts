/** Screen, dark screen or paper: which theme and width the plots are drawn for. */
import { applyTheme, DARK, LIGHT, PAPER, type Theme } from './palette.ts';

/** Width of the printed page within its margins (A4 at 96 px an inch, see @page in page.css), px. */
const PAPER_WIDTH = 690;

export function screenTheme(): Theme {
  return matchMedia('(prefers-color-scheme: dark)').matches ? DARK : LIGHT;
}

/** Calls `drawFor` for paper and back, with every fold open on paper; and when the screen turns dark or light. */
export function followMedium(drawFor: (theme: Theme, width?: number) => void): void {
  let folds: HTMLDetailsElement[] = [];
  let onPaper = false;

  function redraw(theme: Theme, width?: number): void {
    applyTheme(theme);
    drawFor(theme, width);
  }

  function toPaper(): void {
    if (onPaper) return;
    onPaper = true;
    folds = [...document.querySelectorAll<HTMLDetailsElement>('details:not([open])')];
    for (const fold of folds) fold.open = true;
    redraw(PAPER, PAPER_WIDTH);
  }

  function toScreen(): void {
    if (!onPaper) return;
    onPaper = false;
    for (const fold of folds) fold.open = false;
    redraw(screenTheme());
  }

  addEventListener('beforeprint', toPaper);
  addEventListener('afterprint', toScreen);
  matchMedia('print').addEventListener('change', ({ matches }) => (matches ? toPaper() : toScreen()));
  matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () => {
    if (!onPaper) redraw(screenTheme());
  });
}
