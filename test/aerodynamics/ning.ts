/**
 * Ning's residual as printed (Wind Energy 17, 2014; *memory*), written apart from the project's solver and solved by
 * plain halving, to hold the solver against. Windmill range only: φ between 0 and 90°.
 */
import { coefficientsAt } from '../../sim/aerodynamics/airfoil.ts';
import type { BladeSection } from '../../sim/aerodynamics/blade.ts';
import type { RotorOutline } from '../../sim/aerodynamics/momentum.ts';

export interface NingFlow {
  phi: number;
  axialInduction: number;
  swirlInduction: number;
  normalForce: number;
  tangentialForce: number;
}

export function ningFlow(
  section: BladeSection,
  rotor: RotorOutline,
  wind: number,
  rotorSpeed: number,
  airDensity: number,
): NingFlow | undefined {
  const edgeSpeed = rotorSpeed * section.radius;
  const at = (phi: number) => {
    const out = { lift: 0, drag: 0 };
    coefficientsAt(section.airfoil, phi - section.twist, out);
    const normal = out.lift * Math.cos(phi) + out.drag * Math.sin(phi);
    const tangential = out.lift * Math.sin(phi) - out.drag * Math.cos(phi);
    const half = rotor.bladeCount / 2;
    const tip = half * ((rotor.radius - section.radius) / (section.radius * Math.sin(phi)));
    const hub = half * ((section.radius - rotor.hubRadius) / (rotor.hubRadius * Math.sin(phi)));
    const F = (2 / Math.PI) ** 2 * Math.acos(Math.exp(-tip)) * Math.acos(Math.exp(-hub));
    const solidity = (rotor.bladeCount * section.chord) / (2 * Math.PI * section.radius);
    const k = (solidity * normal) / (4 * F * Math.sin(phi) ** 2);
    const kSwirl = (solidity * tangential) / (4 * F * Math.sin(phi) * Math.cos(phi));
    const g1 = 2 * F * k - (10 / 9 - F);
    const g2 = 2 * F * k - F * (4 / 3 - F);
    const g3 = 2 * F * k - (25 / 9 - 2 * F);
    const a = k <= 2 / 3 ? k / (1 + k) : (g1 - Math.sqrt(g2)) / g3;
    const residual = Math.sin(phi) / (1 - a) - (wind / edgeSpeed) * Math.cos(phi) * (1 - kSwirl);
    return { normal, tangential, a, aSwirl: kSwirl / (1 - kSwirl), residual };
  };
  let low = 1e-6;
  let high = Math.PI / 2 - 1e-6;
  if (at(low).residual * at(high).residual > 0) return undefined;
  for (let i = 0; i < 100; i++) {
    const middle = (low + high) / 2;
    if (at(middle).residual * at(low).residual > 0) low = middle;
    else high = middle;
  }
  const phi = (low + high) / 2;
  const { normal, tangential, a, aSwirl } = at(phi);
  const relativeSpeed = (wind * (1 - a)) / Math.sin(phi);
  const pressure = 0.5 * airDensity * relativeSpeed ** 2 * section.chord;
  return {
    phi,
    axialInduction: a,
    swirlInduction: aSwirl,
    normalForce: pressure * normal,
    tangentialForce: pressure * tangential,
  };
}
