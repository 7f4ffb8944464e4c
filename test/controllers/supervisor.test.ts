import { describe, expect, it } from 'vitest';
import { type Measured, OPERATING_STATES, type OperatingState } from '../../controllers/contract.ts';
import { type SupervisorSettings, supervisor } from '../../controllers/supervisor.ts';
import { DEGREE, MACHINE, measured, orders, RPM } from './signals.ts';

const DT = 0.01;

const SETTINGS: SupervisorSettings = {
  sampleTime: DT,
  startUp: { pitch: 15 * DEGREE, pitchRate: 3 * DEGREE, connectSpeed: 7 * RPM, setpointRate: 0.2 * RPM },
  highWind: { above: 25, averaging: 10 },
  normalStop: [
    { kind: 'feather', rate: 4 * DEGREE, to: 88 * DEGREE },
    { kind: 'torque off', over: 2 },
    { kind: 'wait', rotorSpeedBelow: 1 * RPM },
    { kind: 'brake', apply: true },
    { kind: 'park' },
  ],
};

function machineIn(state: OperatingState, brakeApplied = false) {
  const made = supervisor(SETTINGS, MACHINE);
  const memory = new Float64Array(made.memory.length);
  const parked = state === 'parked';
  const point = {
    generatorSpeed: parked ? 0 : 1200 * RPM,
    pitch: parked ? 88 * DEGREE : 10 * DEGREE,
    generatorTorque: 0,
    windSpeed: 10,
  };
  made.start(state, point, brakeApplied, memory);
  let tick = 0;
  return {
    request: (request: 'start' | 'normal stop') => made.request(request, memory),
    step(changes: Partial<Measured> = {}, samples = 1) {
      const signal = measured({ windSpeed: 10, ...changes });
      let out = orders();
      for (let k = 0; k < samples; k++, tick++) {
        out = orders();
        made.step(tick * DT, signal, memory, out);
      }
      return { out, signal, state: OPERATING_STATES[signal.state] };
    },
  };
}

describe('The supervisor', () => {
  it('stays out of the way in power production', () => {
    const { out, signal } = machineIn('power production').step({}, 100);
    expect(out.active).toBe(false);
    expect(signal.speedSetpoint).toBe(MACHINE.ratedGeneratorSpeed);
    expect(signal.powerSetpoint).toBe(MACHINE.ratedPower);
  });

  it('keeps a parked machine feathered, without torque, its brake as it was', () => {
    for (const applied of [true, false]) {
      const { out, state } = machineIn('parked', applied).step({ generatorSpeed: 0, rotorSpeed: 0 }, 10);
      expect(state).toBe('parked');
      expect(out.pitch[0]).toBe(88 * DEGREE);
      expect(out.torqueFraction).toBe(0);
      expect(out.brake).toBe(applied);
    }
  });

  it('starts on request: brake off, blades to the run-up pitch at their rate, then hands over at the connect speed', () => {
    const machine = machineIn('parked', true);
    const slow = { generatorSpeed: 100 * RPM, rotorSpeed: 1 * RPM };
    machine.request('start');
    const running = machine.step(slow, 101);
    expect(running.state).toBe('start-up');
    expect(running.out.brake).toBe(false);
    expect(running.out.pitch[0]).toBeCloseTo(88 * DEGREE - 3 * DEGREE * 1.01, 9);
    expect(machine.step(slow, 5000).out.pitch[0]).toBe(15 * DEGREE);
    const connected = machine.step({ generatorSpeed: 701 * RPM, rotorSpeed: 7.01 * RPM });
    expect(connected.state).toBe('power production');
    expect(connected.out.active).toBe(false);
  });

  it('lets the speed set-point rise from the connect speed to rated', () => {
    const machine = machineIn('parked');
    machine.request('start');
    machine.step({ generatorSpeed: 0, rotorSpeed: 0 });
    const first = machine.step({ generatorSpeed: 700 * RPM }).signal.speedSetpoint;
    const second = machine.step({ generatorSpeed: 700 * RPM }, 100).signal.speedSetpoint;
    // 0.2 rpm/s of the rotor is 20 rpm/s of the generator.
    expect(first).toBeCloseTo((700 + 20 * DT) * RPM, 9);
    expect(second - first).toBeCloseTo(20 * RPM, 9);
    expect(machine.step({}, 10_000).signal.speedSetpoint).toBe(1200 * RPM);
  });

  it('ignores a start while it produces', () => {
    const machine = machineIn('power production');
    machine.request('start');
    expect(machine.step().state).toBe('power production');
  });

  it('stops normally on request and ends parked with the brake on', () => {
    const machine = machineIn('power production');
    machine.request('normal stop');
    const stopping = machine.step({}, 101);
    expect(stopping.state).toBe('normal stop');
    expect(stopping.out.pitch[0]).toBeCloseTo(10 * DEGREE + 4 * DEGREE * 1.01, 9);
    expect(stopping.out.torqueFraction).toBeCloseTo(0.5, 9);
    const slow = { generatorSpeed: 50 * RPM, rotorSpeed: 0.5 * RPM, pitch: new Float64Array(3).fill(88 * DEGREE) };
    const parked = machine.step(slow, 3);
    expect(parked.state).toBe('parked');
    expect(parked.out.brake).toBe(true);
  });

  it('stops by itself when the averaged wind passes the limit, not on a gust', () => {
    expect(machineIn('power production').step({ windSpeed: 30 }, 300).state).toBe('power production');
    // 10 → 30 m/s through a 10 s average passes 25 m/s after 10 ln 4 = 13.9 s.
    expect(machineIn('power production').step({ windSpeed: 30 }, 1380).state).toBe('power production');
    expect(machineIn('power production').step({ windSpeed: 30 }, 1400).state).toBe('normal stop');
  });

  it('counts the machine as parked once the safety chain has taken over', () => {
    const machine = machineIn('power production');
    machine.step({ safetyChainActive: true });
    const after = machine.step({ safetyChainActive: false, pitch: new Float64Array(3).fill(88 * DEGREE) });
    expect(after.state).toBe('parked');
    expect(after.out.active).toBe(true);
    expect(after.out.torqueFraction).toBe(0);
  });
});
