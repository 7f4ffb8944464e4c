import { describe, expect, it } from 'vitest';
import { OPERATING_STATES, type ProtectionSignals } from '../../controllers/contract.ts';
import { type GuardSettings, type ProtectionSettings, safetyChain } from '../../controllers/protection.ts';
import { DEGREE, orders, RPM, signals } from './signals.ts';

const DT = 0.01;
const FEATHER = 88 * DEGREE;

const SETTINGS: ProtectionSettings = {
  sampleTime: DT,
  guards: [
    { watch: 'rotor overspeed', above: 14.4 * RPM, name: 'level 2', hold: 0, reset: 'manual', stop: 'at once' },
    { watch: 'rotor overspeed', above: 13.4 * RPM, name: 'level 1', hold: 0.05, reset: 'manual', stop: 'emergency' },
    { watch: 'generator overspeed', above: 1380 * RPM, name: 'generator', hold: 0, reset: 'manual', stop: 'emergency' },
    { watch: 'pitch deviation', above: 4 * DEGREE, name: 'deviation', hold: 0, reset: 'manual', stop: 'emergency' },
    { watch: 'grid loss', name: 'grid', hold: 0, reset: 'automatic', stop: 'emergency' },
    { watch: 'manual button', name: 'button', hold: 0, reset: 'manual', stop: 'manual' },
  ],
  stops: {
    normal: [{ kind: 'park' }],
    emergency: [
      { kind: 'feather', rate: 6 * DEGREE, to: FEATHER },
      { kind: 'torque off', over: 2 },
      { kind: 'wait', rotorSpeedBelow: 6 * RPM, atMost: 5 },
      { kind: 'brake', apply: true },
      { kind: 'wait', forTime: 1 },
      { kind: 'park' },
    ],
    'at once': [
      { kind: 'brake', apply: true },
      { kind: 'feather', rate: 8 * DEGREE, to: FEATHER, blades: [0, 2] },
    ],
    manual: [
      { kind: 'feather', rate: 4 * DEGREE, to: FEATHER },
      { kind: 'wait', pitchAbove: 60 * DEGREE },
      { kind: 'brake', apply: true },
    ],
  },
};

/** A chain with its memory, stepped sample by sample. */
function chain(settings: ProtectionSettings = SETTINGS) {
  const made = safetyChain(settings, 3);
  const memory = new Float64Array(made.memory.length);
  made.start(memory);
  let tick = 0;
  return {
    made,
    memory,
    step(changes: Partial<ProtectionSignals> = {}, samples = 1) {
      const out = orders();
      for (let k = 0; k < samples; k++, tick++) made.step(tick * DT, signals(changes), memory, out);
      return out;
    },
    latched: () => SETTINGS.guards.filter((_, i) => made.isLatched(i, memory)).map((g) => g.name),
    stop: () => made.stops[made.activeStop(memory)],
  };
}

describe('The safety chain', () => {
  it('leaves a healthy machine alone', () => {
    const one = chain();
    expect(one.step({}, 1000)).toEqual(orders());
    expect(one.latched()).toEqual([]);
  });

  it.each<[string, Partial<ProtectionSignals>, string]>([
    ['level 2', { rotorSpeed: 14.41 * RPM }, 'at once'],
    ['generator', { generatorSpeed: 1381 * RPM }, 'emergency'],
    ['deviation', { pitch: Float64Array.of(10 * DEGREE, 10 * DEGREE, 5.9 * DEGREE) }, 'emergency'],
    ['grid', { gridConnected: false }, 'emergency'],
    ['button', { buttonPressed: true }, 'manual'],
  ])('begins its stop when the %s guard speaks', (name, changes, stop) => {
    const one = chain();
    expect(one.step(changes).active).toBe(true);
    expect(one.latched()).toEqual([name]);
    expect(one.stop()).toBe(stop);
  });

  it('does not speak at the threshold, only above it', () => {
    const one = chain();
    one.step({ rotorSpeed: 13.4 * RPM, generatorSpeed: 1380 * RPM }, 100);
    expect(one.latched()).toEqual([]);
  });

  it('waits as long as the guard holds, and forgets a condition that went away', () => {
    const one = chain();
    const fast = { rotorSpeed: 13.5 * RPM };
    one.step(fast, 5);
    expect(one.latched()).toEqual([]);
    one.step();
    one.step(fast, 5);
    expect(one.latched()).toEqual([]);
    one.step(fast);
    expect(one.latched()).toEqual(['level 1']);
  });

  it('stays latched when the condition goes away', () => {
    const one = chain();
    one.step({ rotorSpeed: 14.5 * RPM });
    expect(one.step({}, 500).active).toBe(true);
    expect(one.made.firstGuard(one.memory)).toBe(0);
    expect(one.made.latchedBy(0, one.memory)).toBe('14.50 rpm above 14.40 rpm');
  });

  it('lets a graver guard put its stop in place of a lesser one, never the other way round', () => {
    const rising = chain();
    rising.step({ gridConnected: false });
    expect(rising.stop()).toBe('emergency');
    rising.step({ gridConnected: false, rotorSpeed: 14.5 * RPM });
    expect(rising.stop()).toBe('at once');
    expect(rising.made.firstGuard(rising.memory)).toBe(4);

    const falling = chain();
    falling.step({ rotorSpeed: 14.5 * RPM });
    falling.step({ rotorSpeed: 14.5 * RPM, buttonPressed: true });
    expect(falling.stop()).toBe('at once');
    expect(falling.latched()).toEqual(['level 2', 'button']);
  });

  it('resets by itself only when parked, with the condition gone and every latched guard willing', () => {
    const willing = chain();
    willing.step({ gridConnected: false, rotorSpeed: 5 * RPM }, 200);
    expect(willing.stop()).toBe('emergency');
    willing.step({ rotorSpeed: 0 }, 2);
    expect(willing.made.activeStop(willing.memory)).toBe(-1);

    const turning = chain();
    turning.step({ gridConnected: false });
    turning.step({}, 10);
    expect(turning.stop()).toBe('emergency');

    const unwilling = chain();
    unwilling.step({ gridConnected: false, buttonPressed: true, rotorSpeed: 0 }, 200);
    unwilling.step({ rotorSpeed: 0 }, 1000);
    expect(unwilling.stop()).toBe('emergency');
  });
});

describe('A stop sequence', () => {
  it('ramps the pitch demand from where each blade is, at its rate, to its target', () => {
    const one = chain();
    const lost = { gridConnected: false };
    expect(one.step(lost).pitch[0]).toBeCloseTo(10 * DEGREE + 6 * DEGREE * DT, 12);
    expect(one.step(lost, 100).pitch[1]).toBeCloseTo(10 * DEGREE + 6 * DEGREE * 101 * DT, 9);
    expect(one.step(lost, 3000).pitch[2]).toBe(FEATHER);
  });

  it('turns only the blades that a step names', () => {
    const out = chain().step({ rotorSpeed: 14.5 * RPM }, 100);
    expect(out.pitch[0]).toBeCloseTo(18 * DEGREE, 9);
    expect(out.pitch[1]).toBe(10 * DEGREE);
    expect(out.pitch[2]).toBeCloseTo(18 * DEGREE, 9);
  });

  it('takes the torque off in the time given', () => {
    const one = chain();
    expect(one.step({ gridConnected: false }).torqueFraction).toBe(1);
    expect(one.step({ gridConnected: false }, 100).torqueFraction).toBeCloseTo(0.5, 9);
    expect(one.step({ gridConnected: false }, 200).torqueFraction).toBe(0);
  });

  it('holds the brake back until the rotor is slow, or until it has waited long enough', () => {
    const slowed = chain();
    expect(slowed.step({ gridConnected: false }, 200).brake).toBe(false);
    expect(slowed.step({ gridConnected: false, rotorSpeed: 5.9 * RPM }).brake).toBe(true);
    const impatient = chain();
    expect(impatient.step({ gridConnected: false }, 500).brake).toBe(false);
    expect(impatient.step({ gridConnected: false }, 2).brake).toBe(true);
  });

  it('waits until every blade has passed the angle', () => {
    const one = chain();
    const twoThere = Float64Array.of(61 * DEGREE, 61 * DEGREE, 20 * DEGREE);
    const allThere = new Float64Array(3).fill(61 * DEGREE);
    const at = (pitch: Float64Array) => ({ buttonPressed: true, pitch, pitchDemand: pitch });
    expect(one.step(at(twoThere), 50).brake).toBe(false);
    expect(one.step(at(allThere)).brake).toBe(true);
  });

  it('shows the standard’s state for its kind, and parked at its end', () => {
    const stateAfter = (changes: Partial<ProtectionSignals>, samples: number) =>
      OPERATING_STATES[chain().step(changes, samples).state];
    expect(stateAfter({ buttonPressed: true }, 10)).toBe('manual stop');
    expect(stateAfter({ gridConnected: false }, 10)).toBe('emergency stop');
    // Its last wait is a second long.
    expect(stateAfter({ gridConnected: false, rotorSpeed: 0 }, 99)).toBe('emergency stop');
    expect(stateAfter({ gridConnected: false, rotorSpeed: 0 }, 103)).toBe('parked');
  });
});

describe('Guards of one kind', () => {
  it('may stand twice with levels of their own', () => {
    const names = SETTINGS.guards.filter((g: GuardSettings) => g.watch === 'rotor overspeed').map((g) => g.name);
    expect(names).toEqual(['level 2', 'level 1']);
    const one = chain();
    one.step({ rotorSpeed: 14.5 * RPM }, 10);
    expect(one.latched()).toEqual(names);
  });
});
