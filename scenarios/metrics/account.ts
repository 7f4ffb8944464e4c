import { Integral, Maximum, Minimum } from '../statistics.ts';
import { fillMetrics, frameIndex, type MetricGroup } from './group.ts';

export const ACCOUNT_METRICS = {
  energy_unexplained_pct: ['Largest energy left unexplained, of the energy turned over by the wind', '%'],
} as const;

const ENERGY_ERROR = frameIndex('energy_error_kj');
const AERODYNAMIC_TORQUE = frameIndex('aerodynamic_torque_kn_m');
const ROTOR_SPEED = frameIndex('rotor_speed_rpm');

/** Whether the simulation's energy account closes. */
export function accountMetrics(): MetricGroup {
  const highest = new Maximum();
  const lowest = new Minimum();
  const turnedOver = new Integral();
  const power = new Float64Array(1);
  return {
    frame({ values }) {
      highest.add(values, ENERGY_ERROR);
      lowest.add(values, ENERGY_ERROR);
      power[0] = Math.abs(values[AERODYNAMIC_TORQUE] * values[ROTOR_SPEED]);
      turnedOver.add(power, 0);
    },
    metrics(tick) {
      const worst = Math.max(highest.result(), -lowest.result());
      const energy = turnedOver.result(tick);
      return fillMetrics('account', ACCOUNT_METRICS, {
        energy_unexplained_pct: energy > 0 ? (100 * worst) / energy : Number.NaN,
      });
    },
  };
}
