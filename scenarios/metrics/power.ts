import { OPERATING_STATES } from '../../controllers/contract.ts';
import type { ScenarioData } from '../scenario.ts';
import { Integral, Mean, Spread } from '../statistics.ts';
import { fillMetrics, frameIndex, inChannelUnit, type MetricGroup } from './group.ts';

export const POWER_METRICS = {
  power_mean_kw: ['Mean electrical power', 'kW'],
  power_spread_kw: ['Spread of electrical power (standard deviation)', 'kW'],
  energy_kwh: ['Electrical energy', 'kWh'],
  power_dips: ['Falls below 90 % of rated power in power production, after 95 % or more', '1'],
} as const;

const POWER = frameIndex('electrical_power_kw');
const STATE = frameIndex('state');
const POWER_PRODUCTION = OPERATING_STATES.indexOf('power production');
const JOULES_PER_KWH = 3.6e6;

/** What the machine delivered. */
export function powerMetrics(scenario: ScenarioData): MetricGroup {
  const mean = new Mean();
  const spread = new Spread();
  const energy = new Integral();
  const ratedFrom = 0.95 * scenario.turbine.ratings.power;
  const dipBelow = 0.9 * scenario.turbine.ratings.power;
  let atRated = false;
  let dips = 0;

  function watchForDip(values: Float64Array): void {
    if (values[POWER] >= ratedFrom) atRated = true;
    if (values[STATE] !== POWER_PRODUCTION) atRated = false;
    if (atRated && values[POWER] < dipBelow) {
      dips++;
      atRated = false;
    }
  }

  return {
    frame({ values }) {
      mean.add(values, POWER);
      spread.add(values, POWER);
      energy.add(values, POWER);
      watchForDip(values);
    },
    metrics: (tick) =>
      fillMetrics('power', POWER_METRICS, {
        power_mean_kw: inChannelUnit('electrical_power_kw', mean.result()),
        power_spread_kw: inChannelUnit('electrical_power_kw', spread.result()),
        energy_kwh: energy.result(tick) / JOULES_PER_KWH,
        power_dips: dips,
      }),
  };
}
