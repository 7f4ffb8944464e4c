import { describe, expect, it } from 'vitest';
import type { Controller } from '../../controllers/contract.ts';
import { safetyChain } from '../../controllers/protection.ts';
import { CHANNELS, channelIndex } from '../../sim/channels.ts';
import type { Clock, RunSetup } from '../../sim/clock.ts';
import type { Rotor } from '../../sim/rotor.ts';
import { SimulationError } from '../../sim/simulation-error.ts';
import type { Turbine } from '../../sim/turbine.ts';
import { cosineGust } from '../../sim/wind/cosine-gust.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { closedFormRotor, eventsOf, PROTECTION, RPM, TURBINE, testController, testRun } from './test-turbine.ts';

const QUIET: Turbine = {
  ...TURBINE,
  sensors: {
    ...TURBINE.sensors,
    controlSpeed: { ...TURBINE.sensors.controlSpeed, noise: 0, resolution: 0 },
    protectionSpeed: { ...TURBINE.sensors.protectionSpeed, noise: 0, resolution: 0 },
  },
};

const GUST = sumWind([steadyWind({ speed: 14 }), cosineGust({ start: 10, duration: 6, amplitude: 5 })]);
const STOP_AT_CREST: RunSetup['events'] = [{ trigger: { kind: 'time', at: 13 }, action: { kind: 'grid loss' } }];

/** Values of one channel (SI) at every frame of the whole run. */
function trace(clock: Clock, name: string): number[] {
  const values: number[] = [];
  const index = channelIndex(name);
  clock.frames.subscribe((frame) => values.push(frame.values[index]));
  clock.run();
  return values;
}

/** Everything the run shows, as one list. */
function everything(clock: Clock): number[] {
  const values: number[] = [];
  clock.frames.subscribe((frame) => values.push(frame.time, ...frame.values));
  clock.run();
  return values;
}

describe('A run that begins in trim', () => {
  it.each([6, 9, 12, 18])('stays in trim at %d m/s', (wind) => {
    const speed = trace(testRun(wind, { turbine: QUIET, rotor: closedFormRotor(QUIET) }), 'rotor_speed_rpm');
    for (const value of speed) expect(Math.abs(value / speed[0] - 1)).toBeLessThan(1e-5);
  });
});

describe('A run that goes on from a snapshot', () => {
  it.each([
    ['odex', { kind: 'odex', relativeTolerance: 1e-6 }],
    ['Runge–Kutta', { kind: 'runge-kutta', step: 0.01 }],
  ] as const)('repeats the unbroken one bit for bit with %s, through gust, stop and standstill', (_, integrator) => {
    const changes = { wind: GUST, events: STOP_AT_CREST, integrator };
    const unbroken = testRun(14, changes);
    unbroken.run(1100);
    const beforeStop = unbroken.snapshot();
    unbroken.run(2350);
    const whileBraking = unbroken.snapshot();
    const end = everything(unbroken);
    for (const snapshot of [beforeStop, whileBraking]) {
      const fork = testRun(14, changes);
      fork.restore(snapshot);
      expect(everything(fork).slice(-end.length)).toEqual(end);
      expect(fork.state()).toEqual(unbroken.state());
    }
  });

  it('repeats it also where law and safety chain run at different rates', () => {
    const changes = {
      controller: testController(0.02),
      protection: safetyChain({ ...PROTECTION, sampleTime: 0.005 }, 3),
    };
    const unbroken = testRun(14, { ...changes, wind: GUST });
    unbroken.run(2501);
    const snapshot = unbroken.snapshot();
    const end = everything(unbroken);
    const fork = testRun(14, { ...changes, wind: GUST });
    fork.restore(snapshot);
    expect(everything(fork)).toEqual(end);
  });
});

describe('Noise', () => {
  it('is the same for the same seed and another for another', () => {
    const measured = (seed: number) => trace(testRun(14, { seed, duration: 5 }), 'generator_speed_measured_rpm');
    expect(measured(3)).toEqual(measured(3));
    expect(measured(3)).not.toEqual(measured(4));
  });
});

describe('A scripted event', () => {
  it('acts at its own instant between samples', () => {
    const at = 5.0037;
    const clock = testRun(14, {
      events: [{ trigger: { kind: 'time', at }, action: { kind: 'grid loss' } }],
      duration: 6,
    });
    const events = eventsOf(clock);
    const torque = trace(clock, 'generator_torque_kn_m');
    expect(events.find((event) => event.kind === 'fault')?.time).toBe(at);
    // Torque decays with the grid-loss time constant, 20 ms, from that instant on.
    expect(torque[501] / torque[500]).toBeCloseTo(Math.exp(-(5.01 - at) / 0.02), 3);
  });

  it('on a crossing acts where the channel passes its level, also between samples', () => {
    const level = 12.4 * RPM;
    const clock = testRun(14, {
      wind: GUST,
      events: [
        {
          trigger: { kind: 'crossing', channel: channelIndex('rotor_speed_rpm'), direction: 'above', level },
          action: { kind: 'grid loss' },
        },
      ],
    });
    const events = eventsOf(clock);
    const speed = trace(clock, 'rotor_speed_rpm');
    const after = speed.findIndex((value) => value > level);
    const share = (level - speed[after - 1]) / (speed[after] - speed[after - 1]);
    const time = events.find((event) => event.kind === 'fault')?.time ?? Number.NaN;
    expect(time).toBeCloseTo((after - 1 + share) * 0.01, 4);
    expect(Number.isInteger(time / 0.01)).toBe(false);
  });

  it('on a crossing waits until the channel has been on the near side', () => {
    const clock = testRun(14, {
      duration: 10,
      events: [
        {
          trigger: { kind: 'crossing', channel: channelIndex('rotor_speed_rpm'), direction: 'above', level: 10 * RPM },
          action: { kind: 'grid loss' },
        },
      ],
    });
    const events = eventsOf(clock);
    clock.run();
    expect(events).toEqual([]);
  });
});

describe('A jump in the wind', () => {
  it('between samples leaves no trace before its instant', () => {
    const at = 5.0061;
    const wind = sumWind([steadyWind({ speed: 14 }), stepWind({ at, rise: 3 })]);
    const run = (w: RunSetup['wind']) =>
      trace(testRun(14, { wind: w, duration: 5.1, turbine: QUIET, rotor: closedFormRotor(QUIET) }), 'rotor_speed_rpm');
    const stepped = run(wind);
    const steady = run(steadyWind({ speed: 14 }));
    expect(stepped.slice(0, 501)).toEqual(steady.slice(0, 501));
    expect(stepped[501]).toBeGreaterThan(steady[501]);
  });
});

describe('A stop sequence', () => {
  it('takes the generator torque from what the law asked last to zero in its time', () => {
    const clock = testRun(14, {
      events: [{ trigger: { kind: 'time', at: 5 }, action: { kind: 'manual stop' } }],
      duration: 8,
    });
    const demand = trace(clock, 'generator_torque_demand_kn_m');
    // The sequence drops the torque over one second.
    expect(demand[550] / demand[499]).toBeCloseTo(0.5, 2);
    expect(demand[601]).toBe(0);
  });
});

describe('The two integrators', () => {
  it('agree through a gust, a grid loss and a braked stop', () => {
    const [first, second] = (
      [
        { kind: 'odex', relativeTolerance: 1e-8 },
        { kind: 'runge-kutta', step: 0.0025 },
      ] as const
    ).map((integrator) =>
      trace(
        testRun(14, { wind: GUST, events: STOP_AT_CREST, integrator, turbine: QUIET, rotor: closedFormRotor(QUIET) }),
        'rotor_speed_rpm',
      ),
    );
    const largest = Math.max(...first.map((value, i) => Math.abs(value - second[i])));
    expect(largest).toBeLessThan(1e-5 * TURBINE.ratings.rotorSpeed);
  });
});

describe('A control law that breaks its contract', () => {
  const law = testController();
  const broken = (spoil: (demands: Parameters<Controller['step']>[3]) => void): Controller => ({
    ...law,
    name: 'spoilt law',
    step(t, measured, memory, demands) {
      law.step(t, measured, memory, demands);
      if (t >= 3) spoil(demands);
    },
  });

  it.each<[string, Controller, RegExp]>([
    [
      'a NaN pitch',
      broken((d) => d.pitch.fill(Number.NaN)),
      /at 3\.000 s: control law "spoilt law" demands pitch NaN of blade 1/,
    ],
    [
      'a pitch out of travel',
      broken((d) => d.pitch.fill(2)),
      /demands pitch 114\.59 deg of blade 1, outside its travel/,
    ],
    [
      'a torque below zero',
      broken((d) => (d.generator = -5)),
      /demands generator torque -5\.0000 N m, outside the range/,
    ],
    [
      'an infinite torque',
      broken((d) => (d.generator = Number.POSITIVE_INFINITY)),
      /demands generator torque Infinity/,
    ],
    [
      'too few blades',
      broken((d) => Object.assign(d, { pitch: new Float64Array(2) })),
      /demands 2 pitch values for 3 blades/,
    ],
    [
      'an error',
      broken(() => {
        throw new Error('table is empty');
      }),
      /control law "spoilt law" threw: table is empty/,
    ],
  ])('stops the run on %s, with its name, the time and the value', (_, controller, message) => {
    const clock = testRun(14, { controller });
    expect(() => clock.run()).toThrow(SimulationError);
    expect(() => testRun(14, { controller }).run()).toThrow(message);
  });
});

describe('A rotor that nothing holds', () => {
  it('stops the run before its numbers mean nothing', () => {
    const controller: Controller = {
      name: 'absent',
      sampleTime: 0.01,
      memory: [],
      needs: [],
      start() {},
      step(_t, _measured, _memory, demands) {
        demands.pitch.fill(0);
        demands.generator = 0;
      },
    };
    const protection = safetyChain({ ...PROTECTION, guards: [] }, 3);
    const rotor: Rotor = {
      ...closedFormRotor(TURBINE),
      loads(_t, _wind, _motion, _x, _stateAt, _pitchAt, _dx, out) {
        out.torque = 8e6;
        out.thrust = 0;
      },
    };
    const clock = testRun(14, { controller, protection, rotor });
    expect(() => clock.run()).toThrow(/more than 3 times the speed never to be exceeded/);
  });
});

describe('A frame', () => {
  /** The surface rotor does not resolve blades, and the test tower has no side-side mode. */
  const absent = /^(flap|edge)_moment|^tower_(side|base_side|top)/;

  it('holds a finite number in every channel that the machine has, moving or at rest', () => {
    const clock = testRun(14, { wind: GUST, events: STOP_AT_CREST });
    clock.frames.subscribe(({ values, time }) => {
      const bad = CHANNELS.filter(({ name }, i) => Number.isFinite(values[i]) === absent.test(name));
      expect({ time, bad }).toEqual({ time, bad: [] });
    });
    clock.run();
  });
});
