/** A page of plots over something other than time; neighbours with the same x label share their axis and cursor. */
import type { PageData } from '../scenarios/page.ts';
import { element } from './element.ts';
import { lineStyle } from './palette.ts';
import { followMedium, screenTheme } from './paper.ts';
import { createPlotStack, type Plot, type Range } from './plot-stack.ts';

type FigureData = Extract<PageData, { kind: 'figure' }>;
type PanelData = FigureData['panels'][number];

export function showFigure(host: HTMLElement, data: FigureData): void {
  if (data.note) host.append(element('p', { class: 'note' }, data.note));
  const stacks = axisGroups(data.panels).map(({ label, panels }) => {
    const stack = createPlotStack({
      axis: label,
      theme: screenTheme(),
      onCursor: (at) => stack.moveCursor(at),
      onRange: () => {},
    });
    host.append(stack.host);
    stack.show({ plots: panels.map(figurePlot), extent: extentOf(panels), marks: [] });
    return stack;
  });
  followMedium((theme, width) => {
    for (const stack of stacks) stack.redraw(theme, width);
  });
}

function axisGroups(panels: readonly PanelData[]): { label: string; panels: PanelData[] }[] {
  const groups: { label: string; panels: PanelData[] }[] = [];
  for (const panel of panels) {
    const last = groups[groups.length - 1];
    if (last?.label === panel.x.label) last.panels.push(panel);
    else groups.push({ label: panel.x.label, panels: [panel] });
  }
  return groups;
}

/** What the title says already is not said again. */
function figurePlot({ title, yLabel, x, lines }: PanelData): Plot {
  return {
    title,
    unit: yLabel === title ? '' : yLabel,
    height: 200,
    lines: lines.map(({ label, values }, index) => ({
      label: label === title ? '' : label,
      owner: label,
      style: lineStyle(index),
      x: numbers(x.values),
      y: numbers(values),
    })),
    levels: [],
  };
}

function extentOf(panels: readonly PanelData[]): Range {
  const values = panels.flatMap(({ x }) => x.values.filter((value) => value !== null));
  const low = Math.min(...values);
  const high = Math.max(...values);
  return low < high ? [low, high] : [low - 1, low + 1];
}

function numbers(values: readonly (number | null)[]): Float64Array {
  return Float64Array.from(values, (value) => value ?? Number.NaN);
}
