/** Whether a rotor's coefficients reach as far as a scenario will take them. */
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { refusal } from './input-error.ts';
import type { ScenarioData } from './scenario.ts';

const DEGREE = Math.PI / 180;
/** s between looks at the wind. */
const LOOK = 0.1;
/** A rotor with the blades at feather may turn slowly backwards, or forwards in no wind: not what tables must cover. */
const STANDSTILL = 0;

/**
 * Any run may end in a stop, so the coefficients must go from standstill to rated speed in the scenario's weakest
 * wind, and over the whole travel of the pitch drives.
 * @throws InputError that names what is missing
 */
export function requireCoverage(scenario: ScenarioData, surface: CoefficientSurface): void {
  const { turbine } = scenario;
  const { pitch, tipSpeedRatio } = surface.range();
  const { minimum, maximum } = turbine.pitchDrive;
  const slack = 1e-9;
  if (pitch[0] > minimum + slack || pitch[1] < maximum - slack) {
    throw refusal(
      scenario.file,
      `the rotor's coefficients cover pitch ${degrees(pitch[0])} to ${degrees(pitch[1])}, but the pitch drives travel ` +
        `from ${degrees(minimum)} to ${degrees(maximum)}; extend the tables`,
    );
  }
  const needed = (turbine.ratings.rotorSpeed * turbine.rotor.radius) / weakestWind(scenario);
  if (tipSpeedRatio[0] > STANDSTILL + slack || tipSpeedRatio[1] < needed - slack) {
    throw refusal(
      scenario.file,
      `the rotor's coefficients cover tip-speed ratios ${tipSpeedRatio[0].toFixed(2)} to ${tipSpeedRatio[1].toFixed(2)}, ` +
        `but this scenario needs ${STANDSTILL} (a stopped rotor) to ${needed.toFixed(2)} (rated speed in its weakest ` +
        'wind); extend the tables',
    );
  }
}

/** No weaker than cut-in: below it the rotor is not kept at rated speed. */
function weakestWind({ wind, duration, turbine }: ScenarioData): number {
  let weakest = wind.rotorMean(0);
  for (let t = LOOK; t <= duration; t += LOOK) weakest = Math.min(weakest, wind.rotorMean(t));
  return Math.max(weakest, turbine.ratings.cutInWind);
}

function degrees(angle: number): string {
  return `${(angle / DEGREE).toFixed(1)} deg`;
}
