import type { Demands } from '../controllers/contract.ts';
import type { Turbine } from './turbine.ts';

/** Slack for rounding at a limit, as a fraction of the limit. */
const ROUNDING = 1e-9;

/** What is wrong with a law's demands, as the end of a sentence that begins with the law's name; undefined if nothing. */
export function checkDemands(demands: Demands, turbine: Turbine): string | undefined {
  const { pitch, pitchAs, generator, generatorAs } = demands;
  const { bladeCount } = turbine.rotor;
  if (pitch.length !== bladeCount) return `demands ${pitch.length} pitch values for ${bladeCount} blades`;
  for (let b = 0; b < bladeCount; b++) {
    if (!Number.isFinite(pitch[b])) return `demands pitch ${pitch[b]} of blade ${b + 1}; a finite number is due`;
    if (pitchAs === 'angle') {
      const { minimum, maximum } = turbine.pitchDrive;
      if (pitch[b] < minimum - ROUNDING || pitch[b] > maximum + ROUNDING) {
        return `demands pitch ${degrees(pitch[b])} of blade ${b + 1}, outside its travel from ${degrees(minimum)} to ${degrees(maximum)}`;
      }
    }
  }
  const quantity = generatorAs === 'torque' ? 'generator torque' : 'power';
  const unit = generatorAs === 'torque' ? 'N m' : 'W';
  const most = generatorAs === 'torque' ? turbine.generator.maximumTorque : Number.MAX_VALUE;
  if (!Number.isFinite(generator)) return `demands ${quantity} ${generator}; a finite number is due`;
  if (generator < 0 || generator > most * (1 + ROUNDING)) {
    return `demands ${quantity} ${generator.toPrecision(5)} ${unit}, outside the range from 0 to ${most.toPrecision(5)} ${unit}`;
  }
  return undefined;
}

function degrees(angle: number): string {
  return `${((angle * 180) / Math.PI).toFixed(2)} deg`;
}
