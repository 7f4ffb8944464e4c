import type { ScenarioData } from '../scenario.ts';
import { Maximum, Percentile, Reversals, type RunningStatistic, TimeBeyond, Travel } from '../statistics.ts';
import { bladeIndices, fillMetrics, inChannelUnit, type MetricGroup } from './group.ts';

export const PITCH_METRICS = {
  pitch_travel_deg: ['Pitch travel, mean of the blades', 'deg'],
  pitch_rate_max_deg_s: ['Fastest pitch rate of any blade', 'deg/s'],
  pitch_rate_p95_deg_s: ['Pitch rate not passed for 95 % of the time', 'deg/s'],
  pitch_reversals: ['Reversals of pitch by more than 0.1 deg, mean of the blades', '1'],
  pitch_duty_pct: ['Share of time that a blade turns faster than 0.1 deg/s, mean of the blades', '%'],
} as const;

const DEGREE = Math.PI / 180;
const REVERSAL_PLAY = 0.1 * DEGREE;
const AT_REST_BELOW = 0.1 * DEGREE;

/** How hard the pitch drives worked. */
export function pitchMetrics(scenario: ScenarioData): MetricGroup {
  const { pitchDrive, rotor } = scenario.turbine;
  const angleAt = bladeIndices('pitch_#_deg', rotor.bladeCount);
  const rateAt = bladeIndices('pitch_rate_#_deg_s', rotor.bladeCount);
  const travel = Array.from(angleAt, () => new Travel());
  const reversals = Array.from(angleAt, () => new Reversals(REVERSAL_PLAY));
  const moving = Array.from(angleAt, () => new TimeBeyond('above', AT_REST_BELOW));
  const fastest = new Maximum();
  const seldomPassed = new Percentile(0.95, 1.25 * Math.max(pitchDrive.rateLimit, ...pitchDrive.backup.rate));
  const rates = new Float64Array(rotor.bladeCount);
  let frames = 0;

  return {
    frame({ values }) {
      frames++;
      for (let blade = 0; blade < angleAt.length; blade++) {
        rates[blade] = Math.abs(values[rateAt[blade]]);
        travel[blade].add(values, angleAt[blade]);
        reversals[blade].add(values, angleAt[blade]);
        moving[blade].add(rates, blade);
        fastest.add(rates, blade);
        seldomPassed.add(rates, blade);
      }
    },
    metrics(tick) {
      const highestRate = fastest.result();
      return fillMetrics('pitch', PITCH_METRICS, {
        pitch_travel_deg: inChannelUnit('pitch_1_deg', meanResult(travel, tick)),
        pitch_rate_max_deg_s: inChannelUnit('pitch_rate_1_deg_s', highestRate),
        pitch_rate_p95_deg_s: inChannelUnit('pitch_rate_1_deg_s', Math.min(seldomPassed.result(), highestRate)),
        pitch_reversals: meanResult(reversals, tick),
        pitch_duty_pct: (100 * meanResult(moving, tick)) / ((frames - 1) * tick),
      });
    },
  };
}

function meanResult(blades: readonly RunningStatistic[], tick: number): number {
  return blades.reduce((sum, blade) => sum + blade.result(tick), 0) / blades.length;
}
