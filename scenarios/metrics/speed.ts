import type { ScenarioData } from '../scenario.ts';
import { Maximum, Mean, Spread, TimeBeyond } from '../statistics.ts';
import { fillMetrics, frameIndex, inChannelUnit, type MetricGroup } from './group.ts';
import { Settling } from './settling.ts';
import { lowestTripLevel } from './trip-level.ts';

export const SPEED_METRICS = {
  rotor_speed_mean_rpm: ['Mean rotor speed', 'rpm'],
  rotor_speed_spread_rpm: ['Spread of rotor speed (standard deviation)', 'rpm'],
  rotor_speed_peak_rpm: ['Highest rotor speed', 'rpm'],
  rotor_speed_overshoot_pct: ['Highest rotor speed above rated', '%'],
  rotor_speed_above_105_pct_s: ['Time above 105 % of rated speed', 's'],
  rotor_speed_above_trip_s: ['Time above the lowest trip level', 's'],
  margin_to_trip_rpm: ['Highest rotor speed below the lowest trip level by', 'rpm'],
  margin_to_trip_pct: ['Highest rotor speed below the lowest trip level by', '%'],
  margin_to_never_exceed_rpm: ['Highest rotor speed below the never-exceed speed by', 'rpm'],
  margin_to_never_exceed_pct: ['Highest rotor speed below the never-exceed speed by', '%'],
  rotor_speed_settled_at_s: ['Rotor speed stays within 2 % of its final value from', 's'],
} as const;

const SPEED = frameIndex('rotor_speed_rpm');

/** How well rotor speed was held, and how near it came to the levels that matter. */
export function speedMetrics(scenario: ScenarioData): MetricGroup {
  const { rotorSpeed: rated, neverExceedSpeed } = scenario.turbine.ratings;
  const tripLevel = lowestTripLevel(scenario);
  const mean = new Mean();
  const spread = new Spread();
  const peak = new Maximum();
  const aboveRated = new TimeBeyond('above', 1.05 * rated);
  const aboveTrip = new TimeBeyond('above', tripLevel);
  const settling = new Settling(rated);

  return {
    frame({ values }) {
      mean.add(values, SPEED);
      spread.add(values, SPEED);
      peak.add(values, SPEED);
      aboveRated.add(values, SPEED);
      aboveTrip.add(values, SPEED);
      settling.add(values, SPEED);
    },
    metrics(tick) {
      const highest = peak.result();
      return fillMetrics('speed', SPEED_METRICS, {
        rotor_speed_mean_rpm: rpm(mean.result()),
        rotor_speed_spread_rpm: rpm(spread.result()),
        rotor_speed_peak_rpm: rpm(highest),
        rotor_speed_overshoot_pct: 100 * Math.max(0, highest / rated - 1),
        rotor_speed_above_105_pct_s: aboveRated.result(tick),
        rotor_speed_above_trip_s: aboveTrip.result(tick),
        margin_to_trip_rpm: rpm(tripLevel - highest),
        margin_to_trip_pct: 100 * (1 - highest / tripLevel),
        margin_to_never_exceed_rpm: rpm(neverExceedSpeed - highest),
        margin_to_never_exceed_pct: 100 * (1 - highest / neverExceedSpeed),
        rotor_speed_settled_at_s: settling.result(tick),
      });
    },
  };
}

function rpm(speed: number): number {
  return inChannelUnit('rotor_speed_rpm', speed);
}
