import { describe, expect, it } from 'vitest';
import { bladePage, bladePicture } from '../../cli/blade-picture.ts';
import { bladeText } from '../../cli/blade-text.ts';
import { type BladeQuestion, bladeView } from '../../cli/blade-view.ts';
import { loadTurbine, shippedFolder } from '../../scenarios/disk.ts';
import { InputError } from '../../scenarios/input-error.ts';
import type { VelocityTriangle } from '../../sim/aerodynamics/velocity-triangles.ts';

const DEGREE = Math.PI / 180;
const FILE = 'skerry-3.6-130.yaml';
const turbine = await loadTurbine(`${shippedFolder()}/turbines/${FILE}`);
const QUESTION: BladeQuestion = { wind: '12 m/s', rotorSpeed: '12 rpm', pitch: '8 deg', stations: '9' };

const ask = (change: Partial<BladeQuestion> = {}) => bladeView(turbine, FILE, { ...QUESTION, ...change });

describe('the velocity triangles that the blade command lists', () => {
  const { stations, totals, blade, point } = ask();

  it('close: φ is the angle of v_n to v_t, W their sum, and the angle of attack what twist and pitch leave of φ', () => {
    expect(stations).toHaveLength(9);
    for (const s of stations) {
      expect(Math.atan2(s.normalSpeed, s.tangentialSpeed)).toBeCloseTo(s.inflowAngle, 9);
      expect(Math.hypot(s.normalSpeed, s.tangentialSpeed)).toBeCloseTo(s.relativeSpeed, 9);
      expect(s.angleOfAttack).toBeCloseTo(s.inflowAngle - s.twist - 8 * DEGREE, 9);
      expect(s.normalSpeed).toBeCloseTo(12 * (1 - s.axialInduction), 9);
      expect(s.tangentialSpeed).toBeCloseTo(point.rotorSpeed * s.radius * (1 + s.swirlInduction), 9);
    }
  });

  it('have a stall margin to the nearer limit, and none on the round root', () => {
    for (const s of stations) {
      if (!s.stall) continue;
      expect(s.stallMargin).toBe(Math.min(s.stall.positive - s.angleOfAttack, s.angleOfAttack - s.stall.negative));
    }
    const root = ask({ stations: '60' }).stations[0];
    expect(root.stallMargin).toBeUndefined();
  });

  it('carry forces that add up to the rotor’s', () => {
    const strip = (blade.radius - blade.hubRadius) / 200;
    const sum = (of: (s: VelocityTriangle) => number) =>
      ask({ stations: '200' }).stations.reduce((total, s) => total + 3 * strip * of(s), 0);
    expect(sum((s) => s.normalForce) / totals.thrust).toBeCloseTo(1, 2);
    expect(sum((s) => s.tangentialForce * s.radius) / totals.torque).toBeCloseTo(1, 2);
  });
});

describe('what is not given', () => {
  it('is taken from steady operation: rated speed and power in 14 m/s', () => {
    const { point, totals, origin } = ask({ wind: '14 m/s', rotorSpeed: undefined, pitch: undefined });
    expect(point.rotorSpeed).toBeCloseTo(turbine.ratings.rotorSpeed, 6);
    expect(point.pitch).toBeGreaterThan(5 * DEGREE);
    expect(totals.power).toBeGreaterThan(turbine.ratings.power);
    expect(totals.power).toBeLessThan(1.15 * turbine.ratings.power);
    expect(origin).toMatch(/rotor speed and pitch of steady operation/);
    expect(ask({ pitch: undefined }).origin).toMatch(/^pitch of steady operation/);
  });

  it('must be given where there is no steady operation', () => {
    expect(() => ask({ wind: '1 m/s', pitch: undefined })).toThrow(/at 1 m\/s .*; give --rotor-speed and --pitch/);
  });
});

describe('bad questions', () => {
  it.each([
    [{ wind: '12' }, /^--wind: 12 needs a unit/],
    [{ wind: '-3 m/s' }, /^--wind: must not be negative/],
    [{ pitch: '3 rpm' }, /^--pitch: "3 rpm" is a rotational speed/],
    [{ stations: '0' }, /^--stations: must be a whole number from 1 to 200, not "0"/],
    [{ stations: '2.5' }, /^--stations:/],
  ])('%j is refused', (change, message) => {
    expect(() => ask(change)).toThrow(InputError);
    expect(() => ask(change)).toThrow(message);
  });

  it('a turbine given by coefficient tables is refused by its file', () => {
    const tables = { tipSpeedRatio: [], pitch: [], torqueCoefficient: [], thrustCoefficient: [] };
    const tabled = { ...turbine, rotor: { ...turbine.rotor, aerodynamics: { kind: 'tables' as const, tables } } };
    expect(() => bladeView(tabled, FILE, QUESTION)).toThrow(/^skerry-3.6-130.yaml: this rotor is given by/);
  });
});

describe('the text', () => {
  it('has a line a station under aligned heads and units, and a dash where the root does not lift', () => {
    const lines = bladeText(ask({ stations: '60' })).split('\n');
    const head = lines.findIndex((l) => l.includes('to +stall'));
    const table = lines.slice(head, head + 62);
    expect(new Set(table.map((l) => l.length)).size).toBe(1);
    expect(table[2]).toMatch(/^ +2\.1 +3 +2\.60 +14\.0 .* - +- /);
    expect(table[61]).toMatch(/^ +64\.5 +99 .* 9\.\d\d +81\.\d\d +81\.\d\d +0\.\d{3} /);
    expect(lines[1]).toBe(
      'wind 12.00 m/s, rotor speed 12.00 rpm, pitch 8.00 deg, tip-speed ratio 6.81 (rotor speed and pitch as given)',
    );
  });
});

describe('the picture', () => {
  const view = ask();
  const picture = bladePicture(view);
  const panels = picture
    .split(/(?=<text[^>]*>[\d.]+ m, \d+ % of the tip radius)/)
    .filter((part) => part.includes('chord line'));

  /** Arrows of a panel, from tail to tip, in the order drawn: v_t, v_n, W. */
  function arrows(panel: string): { x: number; y: number }[] {
    const pattern = /<line x1="([-\d.]+)" y1="([-\d.]+)"[^>]*\/><polygon points="([-\d.]+),([-\d.]+) /g;
    return [...panel.matchAll(pattern)].map(([, x1, y1, x2, y2]) => ({
      x: Number(x2) - Number(x1),
      y: Number(y1) - Number(y2),
    }));
  }

  it('draws at least five triangles to scale: each arrow has the length that its label says, and they close', () => {
    expect(panels.length).toBeGreaterThanOrEqual(5);
    for (const panel of panels) {
      const [inPlane, normal, relative] = arrows(panel);
      const plain = panel.replaceAll(/<[^>]+>|\u200b/g, '');
      const speed = (name: string) => Number(new RegExp(`${name} ([\\d.]+)`).exec(plain)?.[1]);
      const scale = relative.x / speed('vt');
      expect(normal.y / scale / speed('vn')).toBeCloseTo(1, 1);
      expect(Math.hypot(relative.x, relative.y) / scale / speed('W')).toBeCloseTo(1, 1);
      expect(inPlane.x + normal.x).toBeCloseTo(relative.x, 0);
      expect(inPlane.y + normal.y).toBeCloseTo(relative.y, 0);
      const bar = /stroke="#000000" stroke-width="3"/.test(panel) && /(\d+) m\/s/.exec(plain);
      expect(bar).toBeTruthy();
    }
  });

  it('draws the chord at twist plus pitch to the rotor plane', () => {
    for (const panel of panels) {
      const [, x, y] =
        /<line x1="0" y1="0" x2="([-\d.]+)" y2="([-\d.]+)" stroke="#000000" stroke-width="5"/.exec(panel) ?? [];
      const twist = Number(/twist (-?[\d.]+)°/.exec(panel)?.[1]);
      expect(Math.atan2(-Number(y), Number(x)) / DEGREE).toBeCloseTo(twist + 8, 0);
    }
  });

  it('colours stall: a blade at −25° of pitch is stalled, the one in operation mostly clear', () => {
    expect(picture).toMatch(/#009E73.*more than 5° from stall, margin/s);
    expect(bladePicture(ask({ pitch: '-25 deg' }))).toMatch(/#CC79A7"\/>\s*<text[^>]*>stalled, margin -/);
  });

  it('is well-formed and never shows a number that is none, in operation, parked and in still air', () => {
    const parked = ask({ rotorSpeed: '0 rpm', pitch: '88 deg', wind: '30 m/s' });
    const stillAir = ask({ wind: '0 m/s' });
    const nothing = ask({ wind: '0 m/s', rotorSpeed: '0 rpm' });
    for (const any of [view, parked, stillAir, nothing]) {
      const page = bladePage(any);
      expect(page).not.toMatch(/NaN|Infinity|undefined/);
      expect(page.match(/<g[ >]/g)?.length).toBe(page.match(/<\/g>/g)?.length);
      expect(page.match(/<text/g)?.length).toBe(page.match(/<\/text>/g)?.length);
    }
  });

  it('escapes a turbine’s name', () => {
    const named = { ...view, turbine: { ...turbine, name: 'A <b> & C' } };
    expect(bladePicture(named)).toContain('A &lt;b&gt; &amp; C');
    expect(bladePicture(named)).not.toContain('<b>');
  });
});
