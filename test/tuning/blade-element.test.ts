/** Linear models of the machine whose rotor has wake and flap of its own: against the simulation of that very rotor. */
import { describe, expect, it } from 'vitest';
import { controllerOf } from '../../scenarios/control.ts';
import { BladeElementRotor } from '../../sim/aerodynamics/blade-element-rotor.ts';
import { channelIndex } from '../../sim/channels.ts';
import { Clock } from '../../sim/clock.ts';
import { Trim } from '../../sim/trim.ts';
import { steadyWind } from '../../sim/wind/steady.ts';
import { stepWind } from '../../sim/wind/step.ts';
import { sumWind } from '../../sim/wind/sum.ts';
import { axisymmetric, linearPlant } from '../../tuning/linear-plant.ts';
import { modesOf } from '../../tuning/modes.ts';
import { sampledLaw } from '../../tuning/sampled-law.ts';
import { SampledLoop } from '../../tuning/sampled-loop.ts';
import { controllerData, MACHINE, runSetup, TURBINE } from './demo-machine.ts';

const machine = axisymmetric(TURBINE);
const rotor = new BladeElementRotor(machine);
const trim = new Trim(machine, rotor);

function settled(windSpeed: number) {
  const point = trim.at(windSpeed);
  return { ...point, rotorStates: rotor.settledStates(windSpeed, point.rotorSpeed, point.pitch) };
}

describe('the linear model of the blade-element rotor', () => {
  it('has the collective flap mode, well damped by the air, and the wake’s slow poles', () => {
    const plant = linearPlant(machine, rotor, settled(16));
    const modes = modesOf(plant.a);
    const flap = plant.states.indexOf('rotor: blades: flap velocity');
    const flapping = modes.find(({ participation, damping }) => participation[flap] > 0.3 && damping < 1);
    expect(flapping?.damping).toBeGreaterThan(0.3);
    const wake = modes.filter(({ participation }) =>
      /wake/.test(plant.states[participation.indexOf(Math.max(...participation))]),
    );
    expect(wake.length).toBeGreaterThan(40);
    for (const { pole } of wake) expect(pole.re).toBeLessThan(0);
  });

  it.each([16, 22])(
    'steps as the simulation does, within two per cent, for a small rise of a wind of %d m/s',
    (windSpeed) => {
      const rise = 0.05;
      const data = controllerData();
      const point = settled(windSpeed);
      const law = sampledLaw(controllerOf(data, MACHINE), MACHINE, point);
      const loop = new SampledLoop(machine, linearPlant(machine, rotor, point), law);
      const state = new Float64Array(loop.states.length);
      const linear = Array.from({ length: 2000 }, () => loop.step(state, { pitch: 0, wind: rise, setpoint: 0 })[0]);

      const setup = runSetup(
        windSpeed,
        data,
        21,
        sumWind([steadyWind({ speed: windSpeed }), stepWind({ at: 1, rise })]),
      );
      const clock = new Clock({
        ...setup,
        turbine: machine,
        rotor: new BladeElementRotor(machine),
        initial: { ...setup.initial, steady: point },
      });
      const speed = channelIndex('generator_speed_rpm');
      const simulated: number[] = [];
      clock.frames.subscribe(({ tick, values }) => {
        if (tick >= 100) simulated.push(values[speed] - point.generatorSpeed);
      });
      clock.run();
      const largest = Math.max(...simulated.map(Math.abs));
      const off = linear.map((value, k) => Math.abs(value - simulated[k]) / largest);
      expect(Math.max(...off)).toBeLessThan(0.02);
    },
  );
});
