import { EquivalentRange, Maximum, Minimum } from '../statistics.ts';
import { fillMetrics, frameIndex, inChannelUnit, type MetricGroup } from './group.ts';

export const LOAD_METRICS = {
  tower_base_moment_equivalent_mn_m: ['Damage-equivalent range of tower-base moment (1 Hz, exponent 4)', 'MN m'],
  shaft_torque_equivalent_kn_m: ['Damage-equivalent range of shaft torque (1 Hz, exponent 4)', 'kN m'],
  tower_base_side_moment_equivalent_mn_m: [
    'Damage-equivalent range of side-side tower-base moment (1 Hz, exponent 4)',
    'MN m',
  ],
  flap_moment_1_equivalent_mn_m: [
    'Damage-equivalent range of flapwise root moment, blade 1 (1 Hz, exponent 10)',
    'MN m',
  ],
  edge_moment_1_equivalent_mn_m: [
    'Damage-equivalent range of edgewise root moment, blade 1 (1 Hz, exponent 10)',
    'MN m',
  ],
  tower_deflection_max_m: ['Largest tower-top deflection, either way', 'm'],
} as const;

/** Wöhler exponent of welded and forged steel: common practice. */
const STEEL_EXPONENT = 4;
/** Of glass fibre in epoxy: common practice. */
const GLASS_EXPONENT = 10;

const TOWER_MOMENT = frameIndex('tower_base_moment_mn_m');
const SHAFT_TORQUE = frameIndex('shaft_torque_kn_m');
const SIDE_MOMENT = frameIndex('tower_base_side_moment_mn_m');
const FLAP_MOMENT = frameIndex('flap_moment_1_mn_m');
const EDGE_MOMENT = frameIndex('edge_moment_1_mn_m');
const DEFLECTION = frameIndex('tower_deflection_m');

/** Takes the value unless the machine has none. */
function addIfThere(range: EquivalentRange, values: Float64Array, at: number): void {
  if (!Number.isNaN(values[at])) range.add(values, at);
}

/** What tower, shaft and blades went through. */
export function loadMetrics(): MetricGroup {
  const towerMoment = new EquivalentRange(STEEL_EXPONENT);
  const shaftTorque = new EquivalentRange(STEEL_EXPONENT);
  const sideMoment = new EquivalentRange(STEEL_EXPONENT);
  const flapMoment = new EquivalentRange(GLASS_EXPONENT);
  const edgeMoment = new EquivalentRange(GLASS_EXPONENT);
  const farthest = new Maximum();
  const nearest = new Minimum();
  return {
    frame({ values }) {
      towerMoment.add(values, TOWER_MOMENT);
      shaftTorque.add(values, SHAFT_TORQUE);
      addIfThere(sideMoment, values, SIDE_MOMENT);
      addIfThere(flapMoment, values, FLAP_MOMENT);
      addIfThere(edgeMoment, values, EDGE_MOMENT);
      farthest.add(values, DEFLECTION);
      nearest.add(values, DEFLECTION);
    },
    metrics: (tick) =>
      fillMetrics('loads', LOAD_METRICS, {
        tower_base_moment_equivalent_mn_m: inChannelUnit('tower_base_moment_mn_m', towerMoment.result(tick)),
        shaft_torque_equivalent_kn_m: inChannelUnit('shaft_torque_kn_m', shaftTorque.result(tick)),
        tower_base_side_moment_equivalent_mn_m: inChannelUnit('tower_base_side_moment_mn_m', sideMoment.result(tick)),
        flap_moment_1_equivalent_mn_m: inChannelUnit('flap_moment_1_mn_m', flapMoment.result(tick)),
        edge_moment_1_equivalent_mn_m: inChannelUnit('edge_moment_1_mn_m', edgeMoment.result(tick)),
        tower_deflection_max_m: Math.max(farthest.result(), -nearest.result()),
      }),
  };
}
