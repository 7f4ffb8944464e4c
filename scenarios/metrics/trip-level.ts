import type { ScenarioData } from '../scenario.ts';

/** Lowest rotor speed (rad/s) at which an overspeed guard trips, generator guards referred to the rotor; NaN for none. */
export function lowestTripLevel(scenario: ScenarioData): number {
  let lowest = Number.POSITIVE_INFINITY;
  for (const guard of scenario.protection.guards) {
    if (guard.watch === 'rotor overspeed') lowest = Math.min(lowest, guard.above);
    if (guard.watch === 'generator overspeed') {
      lowest = Math.min(lowest, guard.above / scenario.turbine.drivetrain.gearRatio);
    }
  }
  return Number.isFinite(lowest) ? lowest : Number.NaN;
}
