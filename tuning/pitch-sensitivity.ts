import type { CoefficientSurface, LoadSlopes } from '../sim/aerodynamics/coefficient-surface.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { PitchSensitivity } from './gains-by-formula.ts';

/** ∂P/∂θ of the rotor, wind and rotor speed held, at the trim points in the rated region. */
export function pitchSensitivities(surface: CoefficientSurface, points: readonly TrimPoint[]): PitchSensitivity[] {
  const slopes: LoadSlopes = {
    torque: 0,
    thrust: 0,
    torquePerWind: 0,
    torquePerRotorSpeed: 0,
    torquePerPitch: 0,
    thrustPerWind: 0,
    thrustPerRotorSpeed: 0,
    thrustPerPitch: 0,
  };
  return points
    .filter((point) => point.region === 'rated')
    .map(({ windSpeed, rotorSpeed, pitch }) => {
      surface.slopes(windSpeed, rotorSpeed, pitch, slopes);
      return { pitch, powerPerPitch: slopes.torquePerPitch * rotorSpeed };
    });
}
