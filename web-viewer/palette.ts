/** Colours that people with any of the common kinds of colour blindness can tell apart, and dash patterns besides. */
import type { OperatingState } from '../controllers/contract.ts';

/** Colours by name; page.css uses them as custom properties of the same names. */
export interface Theme {
  ink: string;
  /** Text of second rank, axes. */
  faint: string;
  grid: string;
  ground: string;
  /** Ground of plots and cards. */
  sheet: string;
  danger: string;
  good: string;
  accent: string;
  /** Lines of runs, in turn. */
  lines: readonly string[];
}

/**
 * Lines: Okabe and Ito, Color Universal Design, 2008. Each ground leaves out what it swallows (yellow or blue, and
 * black, which is the axes') and starts with what stands out best on it.
 */
export const LIGHT: Theme = {
  ink: '#17212b',
  faint: '#55626e',
  grid: '#dde3e8',
  ground: '#f5f7f8',
  sheet: '#ffffff',
  danger: '#a3161f',
  good: '#0b5f45',
  accent: '#00548a',
  lines: ['#0072b2', '#d55e00', '#009e73', '#cc79a7', '#e69f00', '#56b4e9'],
};

export const DARK: Theme = {
  ink: '#e6ebef',
  faint: '#a3b0bb',
  grid: '#2e3841',
  ground: '#0e1216',
  sheet: '#151b20',
  danger: '#ff8f86',
  good: '#67d3ae',
  accent: '#7cc4f2',
  lines: ['#56b4e9', '#e69f00', '#009e73', '#cc79a7', '#f0e442', '#d55e00'],
};

export const PAPER: Theme = { ...LIGHT, ground: '#ffffff' };

const LINE_COUNT = LIGHT.lines.length;

/** On, off, on, ... in px. Five patterns against six colours: thirty runs before a pair comes again. */
const DASHES = ['', '9,4', '2,3', '11,3,2,3', '5,3'] as const;

/** How one run, or one line of a figure, is drawn everywhere on the page. */
export interface LineStyle {
  /** Index into the theme's lines. */
  colour: number;
  /** SVG dash list; empty for a full line. */
  dash: string;
}

export function lineStyle(index: number): LineStyle {
  return { colour: index % LINE_COUNT, dash: DASHES[index % DASHES.length] ?? '' };
}

/** The style's colour as a value in CSS, which follows the theme by itself. */
export function cssColour({ colour }: LineStyle): string {
  return `var(--line-${colour})`;
}

/** Makes the theme's colours the page's. */
export function applyTheme({ lines, ...colours }: Theme): void {
  const { style } = document.documentElement;
  for (const [name, colour] of Object.entries(colours)) style.setProperty(`--${name}`, colour);
  lines.forEach((colour, index) => {
    style.setProperty(`--line-${index}`, colour);
  });
}

/** Paul Tol's "light" scheme (technical note SRON/EPS/TN/09-002), made for filling labelled cells under black text. */
export const STATE_COLOURS: Readonly<Record<OperatingState, string>> = {
  parked: '#dddddd',
  'start-up': '#eedd88',
  'power production': '#99ddff',
  'normal stop': '#bbcc33',
  'emergency stop': '#ee8866',
  'manual stop': '#ffaabb',
};
