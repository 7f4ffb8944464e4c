import { describe, expect, test } from 'vitest';
import { packColumns, unpackColumns } from '../../scenarios/packed-column.ts';
import { assembleFigure, assemblePage } from '../../scenarios/page.ts';
import { inventRun } from './invented-run.ts';

const TEMPLATE = { script: 'const end = "</script>"; const open = "<!--";', style: 'p{content:"</style>"}' };

describe('packed columns', () => {
  test('keep seven digits, gaps, and the names of blades that move as one', () => {
    const values = Float64Array.from({ length: 20_000 }, (_, index) =>
      index === 7 ? Number.NaN : Math.sin(index) * 1e3,
    );
    const packed = packColumns([
      { name: 'pitch_1_deg', values },
      { name: 'pitch_2_deg', values: values.slice() },
    ]);
    expect(packed[1]).toEqual({ name: 'pitch_2_deg', sameAs: 'pitch_1_deg' });
    const blade2 = unpackColumns(packed).get('pitch_2_deg') ?? new Float32Array();
    expect(blade2[7]).toBeNaN();
    const worst = Math.max(
      ...values.map((value, index) => (index === 7 ? 0 : Math.abs(value - (blade2[index] ?? Number.NaN)))),
    );
    expect(worst).toBeLessThan(6e-5);
  });

  test('that refer to nothing are refused', () => {
    expect(() => unpackColumns([{ name: 'pitch_2_deg', sameAs: 'pitch_1_deg' }])).toThrow(/pitch_2_deg/);
  });
});

describe('the assembled page', () => {
  test('ends its elements only where they end', () => {
    const title = '</title></script>\u2028<!--';
    const html = assemblePage(TEMPLATE, { title, runs: [{ ...inventRun(), name: title }] });
    expect(html.match(/<\/script>/g)).toHaveLength(2);
    expect(html.match(/<\/style>/g)).toHaveLength(1);
    expect(html.match(/<\/title>/g)).toHaveLength(1);
    expect(html).not.toContain('<!--');
    const data = html.split('id="page-data">')[1]?.split('</script>')[0] ?? '';
    expect(data).not.toMatch(/[<>\u2028]/);
    expect(JSON.parse(data).title).toBe(title);
  });

  test('refuses a figure whose line has another number of values than its axis', () => {
    const panel = {
      title: 'Pitch',
      yLabel: 'deg',
      x: { label: 'Wind', values: [1, 2] },
      lines: [{ label: 'a', values: [1] }],
    };
    expect(() => assembleFigure(TEMPLATE, { title: 't', note: '', panels: [panel] })).toThrow(
      '"a" has 1 values against 2 of "Wind"',
    );
  });

  test('of a figure about stops carries the caution, of another none', () => {
    const panel = { title: 'Peak', yLabel: 'rpm', x: { label: 'Wind', values: [1] }, lines: [] };
    expect(assembleFigure(TEMPLATE, { title: 't', note: '', panels: [{ ...panel, caution: true }] })).toContain(
      'Caution:',
    );
    expect(assembleFigure(TEMPLATE, { title: 't', note: '', panels: [panel] })).not.toContain('Caution:');
  });
});
