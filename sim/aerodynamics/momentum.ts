/**
 * Steady balance between the load on a blade section and the momentum of the air that passes its annulus.
 *
 * One unknown, the inflow angle φ, bracketed and then closed in on, as in Ning, "A simple solution method for the blade
 * element momentum equations with guaranteed convergence", Wind Energy 17, 2014. Ning's three angle ranges are joined
 * into one: for any φ the blade's load is known per unit of relative speed, and the thrust law, which rises all the way,
 * can be read backwards to give the one free stream that would have produced it. What is left is to turn φ until that
 * free stream points where the true one does. Seen from above, the solved-for stream turns once round the circle as φ
 * does (drag only takes energy out, so it never vanishes), hence there is a solution for every wind and speed of either
 * sign.
 *
 * Thrust law of an annulus, C_T(a): momentum 4Fa(1−a) up to a = 0.4; from there to a = 1 Buhl (NREL/TP-500-36834,
 * 2005); beyond, where the rotor blows against the wind, a parabola of our own that leaves Buhl's with the same value and
 * slope and tends to the fan in still air, 4Fa². Wind from behind mirrors the law.
 *
 * Swirl is carried by the mass flow that the thrust law implies: V(1−a) where momentum theory holds, as usual, and more
 * above a = 0.4, where the usual V(1−a) would vanish while the wake still takes thrust.
 */
import { type Airfoil, coefficientsAt } from './airfoil.ts';
import type { Blade, BladeSection } from './blade.ts';

export interface MomentumOptions {
  /** Prandtl's loss at the tip and at the hub. */
  readonly tipLoss: boolean;
  readonly hubLoss: boolean;
  /** Whether the section's drag, besides its lift, slows and turns the air. */
  readonly dragInInduction: boolean;
  readonly wakeRotation: boolean;
}

export const FULL_MOMENTUM: MomentumOptions = {
  tipLoss: true,
  hubLoss: true,
  dragInInduction: true,
  wakeRotation: true,
};

/** What a rotor is to a section's balance. */
export type RotorOutline = Pick<Blade, 'bladeCount' | 'radius' | 'hubRadius'>;

/** The flow at one section. Angles rad, speeds m/s, forces N per metre of one blade. */
export interface SectionFlow {
  inflowAngle: number;
  angleOfAttack: number;
  lift: number;
  drag: number;
  /** Prandtl's factor, 1 for none. */
  lossFactor: number;
  relativeSpeed: number;
  /** v_n, normal to the rotor plane, and v_t, in it. */
  normalSpeed: number;
  tangentialSpeed: number;
  /** a, the axial induced speed over the wind, and a', the tangential over ωr; NaN where the divisor is zero. */
  axialInduction: number;
  swirlInduction: number;
  /** Downwind, and in the direction of turning. */
  normalForce: number;
  tangentialForce: number;
}

export function emptyFlow(): SectionFlow {
  return {
    inflowAngle: 0,
    angleOfAttack: 0,
    lift: 0,
    drag: 0,
    lossFactor: 1,
    relativeSpeed: 0,
    normalSpeed: 0,
    tangentialSpeed: 0,
    axialInduction: 0,
    swirlInduction: 0,
    normalForce: 0,
    tangentialForce: 0,
  };
}

/**
 * Steady flow and load of a section.
 * @param windSpeed free stream through the rotor plane, m/s, positive downwind
 * @param rotorSpeed rad/s, positive in the direction of turning
 * @param pitch rad, positive towards feather
 * @param airDensity kg/m³
 * @throws when no balance is found (which the theory rules out)
 */
export function solveSection(
  section: BladeSection,
  rotor: RotorOutline,
  windSpeed: number,
  rotorSpeed: number,
  pitch: number,
  airDensity: number,
  options: MomentumOptions,
  out: SectionFlow,
): void {
  const edgeSpeed = rotorSpeed * section.radius;
  balance.describe(section, rotor, pitch, options);
  const phi = balance.solve(windSpeed, edgeSpeed);

  // Of all streams along the solved direction, the true one has this speed.
  const { axial, edge } = balance;
  const relativeSpeed = (windSpeed * axial + edgeSpeed * edge) / (axial * axial + edge * edge);
  const sin = Math.sin(phi);
  const cos = Math.cos(phi);
  const { lift, drag } = balance.coefficients;
  const pressure = 0.5 * airDensity * relativeSpeed * relativeSpeed * section.chord;
  out.inflowAngle = phi;
  out.angleOfAttack = phi - section.twist - pitch;
  out.lift = lift;
  out.drag = drag;
  out.lossFactor = balance.lossFactor;
  out.relativeSpeed = relativeSpeed;
  out.normalSpeed = relativeSpeed * sin;
  out.tangentialSpeed = relativeSpeed * cos;
  out.axialInduction = windSpeed === 0 ? Number.NaN : 1 - out.normalSpeed / windSpeed;
  out.swirlInduction = edgeSpeed === 0 ? Number.NaN : out.tangentialSpeed / edgeSpeed - 1;
  out.normalForce = pressure * (lift * cos + drag * sin);
  out.tangentialForce = pressure * (lift * sin - drag * cos);
}

/** Load of an annulus per unit of dynamic pressure and width: σ = Bc/(2πr). */
export function solidityAt(bladeCount: number, chord: number, radius: number): number {
  return (bladeCount * chord) / (2 * Math.PI * radius);
}

/** Prandtl's factor never quite closes an annulus: a section at the very tip still passes some air. */
export const LEAST_LOSS_FACTOR = 1e-3;
/**
 * Most that swirl may add to or take from the relative speed, as a share of it. Without through-flow nothing carries
 * swirl away and it would grow without bound; the bound is our own and is met only in nearly still air.
 */
const SWIRL_BOUND = 0.5;
const FIRST_STEP = 0.03;
const ANGLE_TOLERANCE = 1e-11;

/** Prandtl's factor is one to ten digits from here on. */
const NO_LOSS_EXPONENT = 22;

/** Prandtl: F = 2/π · acos(exp(−B/2 · gap / (reference · |sin φ|))). */
function prandtl(bladeCount: number, gap: number, reference: number, sin: number): number {
  const exponent = (0.5 * bladeCount * gap) / (reference * Math.abs(sin));
  return exponent < NO_LOSS_EXPONENT ? (2 / Math.PI) * Math.acos(Math.exp(-exponent)) : 1;
}

/** The free stream along the axis, per unit of relative speed, for a load N = σC_n at s = sin φ. */
export function axialStream(load: number, sin: number, lossFactor: number): number {
  return sin < 0 ? -downwindStream(-load, -sin, lossFactor) : downwindStream(load, sin, lossFactor);
}

function downwindStream(load: number, sin: number, lossFactor: number): number {
  const full = 4 * lossFactor * sin * sin;
  // Momentum: N = 4F(V − s)s, up to a = 0.4.
  if (load >= -full && load <= (2 / 3) * full) return load === 0 ? sin : sin + load / (4 * lossFactor * sin);
  // Buhl, with a = 1 − s/V: N = 2V² − (20/3 − 4F)Vs + (50/9 − 4F)s².
  const linear = (20 / 3 - 4 * lossFactor) * sin;
  if (load > 0) {
    const buhl = 8 * load + 16 * lossFactor * (lossFactor - 4 / 3) * sin * sin;
    return (linear + Math.sqrt(buhl)) / 4;
  }
  // Blowing against a wind V from behind, a = 1 + s/V: −N = 2V² + (20/3 − 4F)Vs + 4Fs².
  const beyond = linear * linear - 8 * (load + full);
  return (linear - Math.sqrt(beyond)) / 4;
}

/**
 * Tangential induced speed per unit of relative speed: σC_t = 4F · mass flow · swirl.
 * @param normal σC_n, `tangential` σC_t, `sin` of the inflow angle, `axial` what `axialStream` gives for them
 */
export function swirlSpeed(normal: number, tangential: number, sin: number, lossFactor: number, axial: number): number {
  const full = 4 * lossFactor * sin * sin;
  const magnitude = normal * Math.sign(sin);
  const momentumHolds = magnitude >= -full && magnitude <= (2 / 3) * full;
  const carried = momentumHolds ? 4 * lossFactor * Math.abs(sin) : normal / (axial - sin);
  const swirl = tangential === 0 ? 0 : tangential / carried;
  return Math.max(-SWIRL_BOUND, Math.min(SWIRL_BOUND, swirl));
}

/** One section's balance while φ is sought; described anew for each section, so that nothing is allocated. */
class SectionBalance {
  readonly coefficients = { lift: 0, drag: 0 };
  lossFactor = 1;
  /** Free stream per unit of relative speed, along the axis and against the section's own motion. */
  axial = 0;
  edge = 0;

  private airfoil: Airfoil = { name: '', nodes: new Float64Array() };
  private setting = 0;
  private solidity = 0;
  private bladeCount = 0;
  private radius = 0;
  private tipGap = 0;
  private hubGap = 0;
  private hubRadius = 0;
  private drags = true;
  private swirls = true;

  describe(section: BladeSection, rotor: RotorOutline, pitch: number, options: MomentumOptions): void {
    this.airfoil = section.airfoil;
    this.setting = section.twist + pitch;
    this.solidity = solidityAt(rotor.bladeCount, section.chord, section.radius);
    this.bladeCount = rotor.bladeCount;
    this.radius = section.radius;
    this.tipGap = options.tipLoss ? rotor.radius - section.radius : Number.POSITIVE_INFINITY;
    this.hubGap = options.hubLoss ? section.radius - rotor.hubRadius : Number.POSITIVE_INFINITY;
    this.hubRadius = rotor.hubRadius;
    this.drags = options.dragInInduction;
    this.swirls = options.wakeRotation;
  }

  /** The inflow angle for the free stream (wind, edge speed), m/s. Leaves the other fields at the solution. */
  solve(wind: number, edgeSpeed: number): number {
    // Outwards from the angle without induction, towards the side where the balance lies, in growing steps.
    const start = Math.atan2(wind, edgeSpeed);
    let near = start;
    let nearMiss = this.miss(near, wind, edgeSpeed);
    if (nearMiss === 0) return near;
    const side = nearMiss < 0 ? -1 : 1;
    let step = FIRST_STEP;
    for (let turned = 0; turned < 2 * Math.PI; ) {
      const far = near + side * step;
      const farMiss = this.miss(far, wind, edgeSpeed);
      const changes = farMiss * nearMiss <= 0;
      const alongStream = this.axial * wind + this.edge * edgeSpeed > 0;
      if (changes && alongStream) return this.closeIn(near, nearMiss, far, farMiss, wind, edgeSpeed);
      if (changes && step > ANGLE_TOLERANCE) {
        step /= 2;
        continue;
      }
      near = far;
      nearMiss = farMiss;
      turned += step;
      step = Math.min(2 * step, 0.5);
    }
    throw new Error(
      `no steady balance at radius ${this.radius.toFixed(2)} m with wind ${wind} m/s and edge speed ${edgeSpeed} m/s`,
    );
  }

  /** How far the free stream that φ needs points away from the true one: zero at the balance. */
  private miss(phi: number, wind: number, edgeSpeed: number): number {
    const sin = Math.sin(phi);
    const cos = Math.cos(phi);
    coefficientsAt(this.airfoil, phi - this.setting, this.coefficients);
    const { lift } = this.coefficients;
    const drag = this.drags ? this.coefficients.drag : 0;
    const normal = this.solidity * (lift * cos + drag * sin);
    const tangential = this.solidity * (lift * sin - drag * cos);

    const tip = prandtl(this.bladeCount, this.tipGap, this.radius, sin);
    const hub = prandtl(this.bladeCount, this.hubGap, this.hubRadius, sin);
    this.lossFactor = Math.max(tip * hub, LEAST_LOSS_FACTOR);
    this.axial = axialStream(normal, sin, this.lossFactor);
    this.edge = cos - (this.swirls ? swirlSpeed(normal, tangential, sin, this.lossFactor, this.axial) : 0);
    return wind * this.edge - edgeSpeed * this.axial;
  }

  /** Chandrupatla, Advances in Engineering Software 28, 1997: inverse quadratic steps where they are safe, else halving. */
  private closeIn(
    near: number,
    nearMiss: number,
    far: number,
    farMiss: number,
    wind: number,
    edgeSpeed: number,
  ): number {
    let a = far;
    let fa = farMiss;
    let b = near;
    let fb = nearMiss;
    let t = 0.5;
    for (let i = 0; i < 100; i++) {
      const x = a + t * (b - a);
      const fx = this.miss(x, wind, edgeSpeed);
      let c: number;
      let fc: number;
      if (fx > 0 === fa > 0) {
        c = a;
        fc = fa;
      } else {
        c = b;
        fc = fb;
        b = a;
        fb = fa;
      }
      a = x;
      fa = fx;
      const width = Math.abs(b - a);
      if (fx === 0 || width < ANGLE_TOLERANCE) return x;
      const xi = (a - b) / (c - b);
      const shape = (fa - fb) / (fc - fb);
      const safe = shape * shape < xi && (1 - shape) * (1 - shape) < 1 - xi;
      t = safe ? (fa / (fb - fa)) * (fc / (fb - fc)) + ((c - a) / (b - a)) * (fa / (fc - fa)) * (fb / (fc - fb)) : 0.5;
      const least = ANGLE_TOLERANCE / (2 * width);
      t = Math.max(least, Math.min(1 - least, t));
    }
    return a;
  }
}

const balance = new SectionBalance();
