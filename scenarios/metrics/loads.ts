import { EquivalentRange, Maximum, Minimum } from '../statistics.ts';
import { fillMetrics, frameIndex, inChannelUnit, type MetricGroup } from './group.ts';

export const LOAD_METRICS = {
  tower_base_moment_equivalent_mn_m: ['Damage-equivalent range of tower-base moment (1 Hz, exponent 4)', 'MN m'],
  shaft_torque_equivalent_kn_m: ['Damage-equivalent range of shaft torque (1 Hz, exponent 4)', 'kN m'],
  tower_deflection_max_m: ['Largest tower-top deflection, either way', 'm'],
} as const;

/** Wöhler exponent of welded and forged steel: common practice. */
const STEEL_EXPONENT = 4;

const TOWER_MOMENT = frameIndex('tower_base_moment_mn_m');
const SHAFT_TORQUE = frameIndex('shaft_torque_kn_m');
const DEFLECTION = frameIndex('tower_deflection_m');

/** What tower and shaft went through. */
export function loadMetrics(): MetricGroup {
  const towerMoment = new EquivalentRange(STEEL_EXPONENT);
  const shaftTorque = new EquivalentRange(STEEL_EXPONENT);
  const farthest = new Maximum();
  const nearest = new Minimum();
  return {
    frame({ values }) {
      towerMoment.add(values, TOWER_MOMENT);
      shaftTorque.add(values, SHAFT_TORQUE);
      farthest.add(values, DEFLECTION);
      nearest.add(values, DEFLECTION);
    },
    metrics: (tick) =>
      fillMetrics('loads', LOAD_METRICS, {
        tower_base_moment_equivalent_mn_m: inChannelUnit('tower_base_moment_mn_m', towerMoment.result(tick)),
        shaft_torque_equivalent_kn_m: inChannelUnit('shaft_torque_kn_m', shaftTorque.result(tick)),
        tower_deflection_max_m: Math.max(farthest.result(), -nearest.result()),
      }),
  };
}
