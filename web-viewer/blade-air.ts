/** The air at each blade at the cursor's instant: velocity triangles to scale, and angles of attack between those of stall. */
import { drawing, element } from './element.ts';
import { lineSample } from './line-sample.ts';
import { cssColour, lineStyle } from './palette.ts';
import type { BladeRecord, Run } from './run.ts';

export interface BladeAir {
  readonly host: HTMLElement;
  /** Shows the run's blades at an instant, s; nothing where the run has not recorded them. */
  show(run: Run | undefined, at: number): void;
}

const DEGREE = Math.PI / 180;
/** Stations of each blade whose triangles are drawn, from root to tip. */
const MOST_TRIANGLES = 5;

interface Point {
  x: number;
  y: number;
}

/** One station of one blade at the instant; angles in degrees, speeds in m/s. */
interface StationAir {
  normalSpeed: number;
  tangentialSpeed: number;
  attack: number;
  /** Angle of the chord to the rotor plane. */
  setting: number;
}

export function createBladeAir(): BladeAir {
  const attack = drawing('svg', { class: 'attack', viewBox: `0 0 ${CHART.width} ${CHART.height}`, role: 'img' });
  const rows = element('div', { class: 'triangles' });
  const note = element(
    'p',
    { class: 'note' },
    'Triangles: the air as the moving section meets it. The section moves to the left in the rotor plane, the wind blows ' +
      'up the page; thick: the chord. Each station keeps its own scale over the whole run.',
  );
  const host = element(
    'section',
    { id: 'blades', 'aria-labelledby': 'blades-title', hidden: true },
    element('h2', { id: 'blades-title' }, 'The air at each blade, at the cursor'),
    element('div', { class: 'blades' }, attack, rows),
    note,
  );
  const scales = new WeakMap<BladeRecord, number[]>();

  function scaleOf(record: BladeRecord): number[] {
    const known = scales.get(record) ?? fastest(record);
    scales.set(record, known);
    return known;
  }

  return {
    host,
    show(run, at) {
      const record = run?.blades;
      host.hidden = record === undefined;
      if (!record) return;
      const row = nearestRow(record.time, at);
      drawAttack(attack, record, row);
      rows.replaceChildren(...bladeRows(record, row, scaleOf(record)));
    },
  };
}

function nearestRow(time: Float32Array, at: number): number {
  let low = 0;
  let high = time.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((time[middle] ?? 0) < at) low = middle + 1;
    else high = middle;
  }
  return low > 0 && at - (time[low - 1] ?? 0) < (time[low] ?? 0) - at ? low - 1 : low;
}

function recorded(record: BladeRecord, name: string, row: number): number {
  return record.columns.get(name)?.[row] ?? Number.NaN;
}

function station(record: BladeRecord, name: string, s: number): number {
  return record.stations.get(name)?.[s] ?? Number.NaN;
}

function stationCount(record: BladeRecord): number {
  return record.stations.get('radius_m')?.length ?? 0;
}

function airAt(record: BladeRecord, row: number, b: number, s: number): StationAir {
  const place = `${b + 1}_${s + 1}`;
  return {
    normalSpeed: recorded(record, `normal_speed_${place}_m_s`, row),
    tangentialSpeed: recorded(record, `tangential_speed_${place}_m_s`, row),
    attack: recorded(record, `angle_of_attack_${place}_deg`, row),
    setting: station(record, 'twist_deg', s) + recorded(record, `pitch_${b + 1}_deg`, row),
  };
}

/** The highest relative speed at each station over the run and the blades, m/s. */
function fastest(record: BladeRecord): number[] {
  return Array.from({ length: stationCount(record) }, (_, s) => {
    let most = 0;
    for (let b = 0; b < record.bladeCount; b++) {
      for (let row = 0; row < record.time.length; row++) {
        const { normalSpeed, tangentialSpeed } = airAt(record, row, b, s);
        most = Math.max(most, Math.hypot(normalSpeed, tangentialSpeed));
      }
    }
    return most;
  });
}

/** Stations to draw: evenly from the first to the last. */
function drawnStations(record: BladeRecord): number[] {
  const count = stationCount(record);
  const drawn = Math.min(count, MOST_TRIANGLES);
  return Array.from({ length: drawn }, (_, i) => (drawn < 2 ? 0 : Math.round((i * (count - 1)) / (drawn - 1))));
}

function bladeRows(record: BladeRecord, row: number, scales: readonly number[]): HTMLElement[] {
  const turn = 360;
  return Array.from({ length: record.bladeCount }, (_, b) => {
    const azimuth = (recorded(record, 'azimuth_deg', row) + (turn * b) / record.bladeCount) % turn;
    const pitch = recorded(record, `pitch_${b + 1}_deg`, row);
    return element(
      'div',
      { class: 'blade-row' },
      element(
        'h3',
        {},
        lineSample(lineStyle(b)),
        ` Blade ${b + 1}: azimuth ${azimuth.toFixed(0)}°, pitch ${pitch.toFixed(1)}°`,
      ),
      element(
        'div',
        { class: 'stations' },
        ...drawnStations(record).map((s) => triangle(record, row, b, s, scales[s] ?? 0)),
      ),
    );
  });
}

const PANEL = { width: 190, height: 190 };
const APEX: Point = { x: 112, y: 88 };
const LONGEST = 100;
const CHORD = 58;

function along(from: Point, angle: number, length: number): Point {
  return { x: from.x + length * Math.cos(angle), y: from.y - length * Math.sin(angle) };
}

function triangle(record: BladeRecord, row: number, b: number, s: number, scale: number): HTMLElement {
  const air = airAt(record, row, b, s);
  const { normalSpeed, tangentialSpeed, attack, setting } = air;
  const inflow = Math.atan2(normalSpeed, tangentialSpeed);
  const speed = Math.hypot(normalSpeed, tangentialSpeed);
  const tail = along(APEX, inflow, scale > 0 ? (-LONGEST * speed) / scale : 0);
  const corner = { x: APEX.x, y: tail.y };
  const chordEnd = along(APEX, setting * DEGREE, CHORD);
  const onward = along(APEX, inflow, CHORD);
  const radius = station(record, 'radius_m', s);
  const words = stallWords(record, s, attack);
  return element(
    'figure',
    { class: words === 'stalled' ? 'station stalled' : 'station' },
    drawing(
      'svg',
      { viewBox: `0 0 ${PANEL.width} ${PANEL.height}`, 'aria-hidden': 'true' },
      line({ x: 4, y: APEX.y }, { x: PANEL.width - 4, y: APEX.y }, 'plane'),
      line(APEX, onward, 'onward'),
      line(tail, corner, 'part'),
      line(corner, APEX, 'part'),
      line(tail, APEX, 'whole'),
      line(APEX, chordEnd, 'chord'),
      drawing('circle', { class: 'edge', cx: APEX.x, cy: APEX.y, r: 3.5 }),
    ),
    element(
      'figcaption',
      {},
      element('b', {}, `${radius.toFixed(1)} m: α ${attack.toFixed(1)}°`),
      element('span', {}, words),
      element('span', {}, 'v', element('sub', {}, 'n'), ` ${normalSpeed.toFixed(1)} m/s`),
      element('span', {}, 'v', element('sub', {}, 't'), ` ${tangentialSpeed.toFixed(1)} m/s`),
    ),
  );
}

function stallWords(record: BladeRecord, s: number, attack: number): string {
  const margin = Math.min(
    station(record, 'stall_positive_deg', s) - attack,
    attack - station(record, 'stall_negative_deg', s),
  );
  if (Number.isNaN(margin)) return 'does not lift';
  return margin < 0 ? 'stalled' : `${margin.toFixed(1)}° from stall`;
}

function line(from: Point, to: Point, kind: string): SVGLineElement {
  const at = (value: number) => value.toFixed(1);
  return drawing('line', { class: kind, x1: at(from.x), y1: at(from.y), x2: at(to.x), y2: at(to.y) });
}

const CHART = { width: 520, height: 300, left: 46, right: 12, top: 30, bottom: 40 };
/** The chart keeps its heights as the cursor moves; what goes beyond is drawn at the edge. deg */
const HIGHEST_ATTACK = 40;
const ATTACK_STEP = 10;
const RADIUS_STEP = 10;

function drawAttack(host: SVGSVGElement, record: BladeRecord, row: number): void {
  const radii = record.stations.get('radius_m') ?? new Float32Array();
  const last = radii[radii.length - 1] ?? 1;
  const x = (radius: number) => CHART.left + ((CHART.width - CHART.left - CHART.right) * radius) / last;
  const middle = (CHART.top + CHART.height - CHART.bottom) / 2;
  const half = (CHART.height - CHART.bottom - CHART.top) / 2;
  const y = (angle: number) =>
    middle - (half * Math.max(-HIGHEST_ATTACK, Math.min(HIGHEST_ATTACK, angle))) / HIGHEST_ATTACK;
  const path = (angle: (s: number) => number) => {
    const points = Array.from(radii, (radius, s) => [x(radius), y(angle(s))] as const);
    const there = points.filter(([, at]) => Number.isFinite(at));
    return there.map(([px, py], i) => `${i === 0 ? 'M' : 'L'}${px.toFixed(1)} ${py.toFixed(1)}`).join(' ');
  };
  const grid: SVGElement[] = [];
  for (let angle = -HIGHEST_ATTACK; angle <= HIGHEST_ATTACK; angle += ATTACK_STEP) {
    grid.push(
      drawing('line', { class: 'grid', x1: CHART.left, x2: CHART.width - CHART.right, y1: y(angle), y2: y(angle) }),
      drawing('text', { x: CHART.left - 6, y: y(angle) + 4, 'text-anchor': 'end' }, String(angle)),
    );
  }
  for (let radius = 0; radius <= last; radius += RADIUS_STEP) {
    grid.push(
      drawing('text', { x: x(radius), y: CHART.height - CHART.bottom + 18, 'text-anchor': 'middle' }, String(radius)),
    );
  }
  const stall = ['stall_positive_deg', 'stall_negative_deg'].map((name) =>
    drawing('path', { class: 'stall', d: path((s) => station(record, name, s)) }),
  );
  const blades = Array.from({ length: record.bladeCount }, (_, b) =>
    drawing('path', {
      class: 'blade',
      d: path((s) => recorded(record, `angle_of_attack_${b + 1}_${s + 1}_deg`, row)),
      style: `stroke: ${cssColour(lineStyle(b))}`,
      'stroke-dasharray': lineStyle(b).dash || undefined,
    }),
  );
  host.setAttribute('aria-label', 'Angle of attack along each blade between the angles of stall');
  host.replaceChildren(
    drawing('text', { class: 'title', x: CHART.left, y: 16 }, 'Angle of attack along each blade, deg; dashed: stall'),
    ...grid,
    ...stall,
    ...blades,
    drawing('text', { x: (CHART.left + CHART.width) / 2, y: CHART.height - 6, 'text-anchor': 'middle' }, 'radius, m'),
  );
}
