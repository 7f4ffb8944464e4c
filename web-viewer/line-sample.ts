import { drawing } from './element.ts';
import { cssColour, type LineStyle } from './palette.ts';

/** Marks that tell lines of one style apart. */
export type LineSymbol = 'circle' | 'triangle-up' | 'square';

const SYMBOL_PATHS: Readonly<Record<LineSymbol, string>> = {
  circle: 'M 11 5 a 4 4 0 1 0 8 0 a 4 4 0 1 0 -8 0',
  'triangle-up': 'M 10.5 9 L 15 0.5 L 19.5 9 Z',
  square: 'M 11 1 h 8 v 8 h -8 Z',
};

/** A short piece of a line as the plots draw it. */
export function lineSample(style: LineStyle, symbol?: LineSymbol): SVGSVGElement {
  return drawing(
    'svg',
    { class: 'line-sample', width: 30, height: 10, viewBox: '0 0 30 10', 'aria-hidden': 'true' },
    drawing('line', {
      x1: 0,
      x2: 30,
      y1: 5,
      y2: 5,
      'stroke-width': 3,
      'stroke-dasharray': style.dash || undefined,
      style: `stroke: ${cssColour(style)}`,
    }),
    symbol ? drawing('path', { d: SYMBOL_PATHS[symbol], style: `fill: ${cssColour(style)}` }) : undefined,
  );
}
