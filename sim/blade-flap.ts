import type { RotorData } from './turbine.ts';

/** m/s² */
const GRAVITY = 9.80665;
const STRIPS = 400;

/**
 * One flap mode per blade, q the tip's deflection normal to blade and direction of turning (downwind), with the mode
 * shape φ. Kinetic energy of a blade beyond that of a rigid one, with the rotor at speed Ω and the tower top at ẋ:
 *
 *     ½ m_f q̇² + m_c ẋ q̇ + ½ Ω² (2 c q − κ m_f q²)
 *
 * (m_f = ∫mφ², m_c = cos β cos τ ∫mφ, c = sin β cos β ∫mrφ, κ m_f = ∫φ'² ∫_r^R mρ dρ dr: what the blade is drawn in as
 * it bends), elastic energy ½ m_f ω₀² q², and gravity along the blade and normal to it. The equations of motion are
 * Lagrange's, so that energy is kept between blades, shaft and tower: stiffening ω² = ω₀² + κΩ², and its reaction on
 * the shaft. `kappa` and the weights are computed from the mass and the shape.
 *
 * The mode stays normal to the blade's sweep whatever the pitch: a feathered blade nods here as an unfeathered one would,
 * with less damping from the air than one that takes its flapwise direction along.
 */
export class BladeFlap {
  /** m_f, kg; κ; ω₀, rad/s; structural damping 2ζω₀ m_f, N s/m. */
  readonly modalMass: number;
  readonly kappa: number;
  readonly frequency: number;
  readonly damping: number;
  /** m_c, kg. */
  readonly towerCoupling: number;
  /** κ m_f and c, kg and kg m. */
  readonly drawIn: number;
  readonly coneMoment: number;
  /** g ∫φ'² ∫_r^R m dρ dr, N/m; g ∫mφ, N. */
  readonly weightStiffness: number;
  readonly weightForce: number;
  /** About the root: mass moment ∫m(r − r₀), g times it, ∫mφ(r − r₀), ∫mr(r − r₀), ∫mrφ. */
  readonly massMoment: number;
  readonly weightMoment: number;
  readonly shapeMoment: number;
  readonly inertiaMoment: number;
  readonly radiusMoment: number;
  private readonly coefficients: readonly number[];
  private readonly root: number;
  private readonly span: number;

  /** @throws Error for a rotor without `structure` */
  constructor(rotor: RotorData) {
    const { structure, radius, hubRadius, cone = 0, tilt = 0 } = rotor;
    if (!structure) throw new Error('this rotor says nothing of the mass of its blades');
    const sum = structure.flap.shape.reduce((a, b) => a + b, 0);
    this.coefficients = structure.flap.shape.map((c) => c / sum);
    this.root = hubRadius;
    this.span = radius - hubRadius;

    const step = this.span / STRIPS;
    let outboardMass = 0;
    let outboardMoment = 0;
    let [mass, force, drawIn, weight, first, shape, inertia, radial] = [0, 0, 0, 0, 0, 0, 0, 0];
    for (let i = STRIPS - 1; i >= 0; i--) {
      const r = hubRadius + (i + 0.5) * step;
      const arm = r - hubRadius;
      const m = interpolate(structure.radius, structure.massPerLength, r) * step;
      const phi = this.shapeAt(r);
      const slope = this.slopeAt(r);
      drawIn += slope * slope * (outboardMoment + 0.5 * m * r) * step;
      weight += slope * slope * (outboardMass + 0.5 * m) * step;
      outboardMass += m;
      outboardMoment += m * r;
      mass += m * phi * phi;
      force += m * phi;
      first += m * arm;
      shape += m * phi * arm;
      inertia += m * r * arm;
      radial += m * r * phi;
    }
    this.modalMass = mass;
    this.drawIn = drawIn;
    this.kappa = drawIn / mass;
    this.frequency = 2 * Math.PI * structure.flap.frequency;
    this.damping = 2 * structure.flap.dampingRatio * this.frequency * mass;
    this.towerCoupling = force * Math.cos(cone) * Math.cos(tilt);
    this.coneMoment = radial * Math.sin(cone) * Math.cos(cone);
    this.weightStiffness = GRAVITY * weight;
    this.weightForce = GRAVITY * force;
    this.massMoment = first;
    this.weightMoment = GRAVITY * first;
    this.shapeMoment = shape;
    this.inertiaMoment = inertia;
    this.radiusMoment = radial;
  }

  /** φ at a radius, m. */
  shapeAt(radius: number): number {
    const s = (radius - this.root) / this.span;
    return this.coefficients.reduce((sum, c, i) => sum + c * s ** (i + 2), 0);
  }

  private slopeAt(radius: number): number {
    const s = (radius - this.root) / this.span;
    return this.coefficients.reduce((sum, c, i) => sum + (c * (i + 2) * s ** (i + 1)) / this.span, 0);
  }

  /**
   * Force on the mode apart from the air's and the damping's, N.
   * @param q m, `speed` rad/s; upward parts of the blade's direction and of its normal
   */
  ownForce(q: number, speed: number, bladeUp: number, normalUp: number): number {
    const elastic = -this.modalMass * this.frequency * this.frequency * q;
    const centrifugal = speed * speed * (this.coneMoment - this.drawIn * q);
    return elastic + centrifugal + this.weightStiffness * bladeUp * q - this.weightForce * normalUp;
  }

  /** Change of the rotor's inertia by a blade bent by `q` (m), kg m². */
  inertiaChange(q: number): number {
    return 2 * this.coneMoment * q - this.drawIn * q * q;
  }

  /** Its slope, kg m. */
  inertiaSlope(q: number): number {
    return 2 * this.coneMoment - 2 * this.drawIn * q;
  }

  /** Elastic and gravity energy, J; arguments as in `ownForce`. */
  potentialEnergy(q: number, bladeUp: number, normalUp: number): number {
    const elastic = 0.5 * this.modalMass * this.frequency * this.frequency * q * q;
    return elastic - 0.5 * this.weightStiffness * bladeUp * q * q + this.weightForce * normalUp * q;
  }

  /** Deflection at which the mode rests under a force of the air (N) at a speed (rad/s), gravity left out, m. */
  restingAt(force: number, speed: number): number {
    const stiffness = this.modalMass * this.frequency * this.frequency + this.drawIn * speed * speed;
    return (force + this.coneMoment * speed * speed) / stiffness;
  }
}

function interpolate(x: readonly number[], y: readonly number[], at: number): number {
  const last = x.length - 1;
  if (at <= x[0]) return y[0];
  if (at >= x[last]) return y[last];
  let i = 1;
  while (x[i] < at) i++;
  return y[i - 1] + ((y[i] - y[i - 1]) * (at - x[i - 1])) / (x[i] - x[i - 1]);
}
