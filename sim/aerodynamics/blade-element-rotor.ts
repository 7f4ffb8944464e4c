import { BladeFlap } from '../blade-flap.ts';
import { emptyLoads, type Rotor, type RotorCarrier, type RotorLoads, type RotorMotion } from '../rotor.ts';
import type { Turbine } from '../turbine.ts';
import type { WindField } from '../wind/wind.ts';
import { coefficientsFrom } from './airfoil.ts';
import { type Blade, bladeOf } from './blade.ts';
import { lateRateRatio, WAKE_SHARE, wakeRate } from './dynamic-wake.ts';
import { type AttachedFlow, attachedFlow, LAG_CHORDS, laggedLift, staticAttachment } from './lift-lag.ts';
import { lossAt } from './loss-table.ts';
import {
  axialStream,
  emptyFlow,
  FULL_MOMENTUM,
  LEAST_LOSS_FACTOR,
  solidityAt,
  solveSection,
  swirlSpeed,
} from './momentum.ts';
import { steadyRotor } from './steady-rotor.ts';
import { addTowerShadow, type TowerShape } from './tower-shadow.ts';

export interface BladeElementOptions {
  /** Strips per blade. */
  sections: number;
  /** `dynamic`: Øye's filter. `equilibrium`: the momentum balance holds at every instant, for any motion of the blade. */
  wake: 'dynamic' | 'equilibrium';
  /** `lagging`: Øye's trailing-edge separation lag. */
  sectionLift: 'steady' | 'lagging';
}

/** Twenty strips are within 0.4 % of forty in torque and thrust over the range of operation of a test blade. */
export const BLADE_ELEMENT_DEFAULTS: BladeElementOptions = { sections: 20, wake: 'dynamic', sectionLift: 'steady' };

/** States per section, each a run of one number per section of every blade. */
const WAKE_STATES = ['axial wake, early', 'axial wake', 'tangential wake, early', 'tangential wake'] as const;
const WAKE_SCALE = 5;

/** The air at every section as the last `loads` found it; index blade · sections + section. */
export interface SectionFlows {
  readonly sectionCount: number;
  /** rad */
  readonly angleOfAttack: Float64Array;
  /** v_n and v_t with all that moves the air and the section, and their induced parts, m/s. */
  readonly normalSpeed: Float64Array;
  readonly tangentialSpeed: Float64Array;
  readonly axialInduced: Float64Array;
  readonly tangentialInduced: Float64Array;
}

/**
 * Each section of each blade in the time domain: the wind where the section is, the motion of shaft, tower and blade,
 * each blade at its own pitch.
 *
 * The quasi-steady induced velocity of a section is what `momentum.ts` asks for the load that its present flow gives it:
 * at rest that is the steady balance itself, so that a rotor in uniform wind settles on the steady solution. Every blade
 * induces its own velocity, as if the others carried the same load. Turning of the nacelle is too slow to count as
 * motion of the sections.
 */
export class BladeElementRotor implements Rotor {
  readonly resolvesBlades = true;
  readonly stateNames: string[] = [];
  readonly stateScales: number[] = [];
  readonly blade: Blade;
  readonly flap: BladeFlap | undefined;
  readonly flows: SectionFlows;

  private readonly bladeCount: number;
  private readonly sectionCount: number;
  private readonly airDensity: number;
  private readonly tipRadius: number;
  private readonly hubRadius: number;
  private readonly overhang: number;
  private readonly tower: TowerShape | undefined;
  private readonly sinTilt: number;
  private readonly cosTilt: number;
  private readonly sinCone: number;
  private readonly cosCone: number;
  private readonly isDynamic: boolean;
  private readonly lags: boolean;

  /** Offsets in the rotor's own states. */
  private readonly lagAt: number;
  private readonly flapAt: number;
  private readonly flapRateAt: number;

  /** Per section. */
  private readonly radius: Float64Array;
  private readonly chord: Float64Array;
  private readonly twist: Float64Array;
  private readonly solidity: Float64Array;
  private readonly tipExponent: Float64Array;
  private readonly hubExponent: Float64Array;
  private readonly rateRatio: Float64Array;
  private readonly shape: Float64Array;
  private readonly attached: readonly AttachedFlow[];
  private readonly nodes: readonly Float64Array[];
  /** ½ρ c Δr, kg/m. */
  private readonly pressure: Float64Array;

  /**
   * Scratch: own states and their derivatives, then one blade's axes, winds and loads. The loops over sections are kept
   * short, over typed arrays, so that the compiler can lay them out whole: this is where a run's time goes.
   */
  private readonly own: Float64Array;
  private readonly rate: Float64Array;
  /** The last question (time, motion, pitch; the states are in `own`) and what `loads` answered to it. */
  private askedWind: WindField | undefined;
  private readonly asked: Float64Array;
  private readonly answer: RotorLoads;
  private readonly hubWind = new Float64Array(3);
  private readonly sectionWind = new Float64Array(3);
  private readonly freeNormal: Float64Array;
  private readonly freeTangential: Float64Array;
  private readonly speed: Float64Array;
  private readonly lift: Float64Array;
  private readonly drag: Float64Array;
  private readonly normalLoad: Float64Array;
  private readonly tangentialLoad: Float64Array;
  private readonly axes = { along: new Float64Array(3), normal: new Float64Array(3), turning: new Float64Array(3) };
  /** Of every blade: how its normal and its turning go with the tower top's fore-aft and side-side motion. */
  private readonly carried: Float64Array;
  private readonly coefficients = { lift: 0, drag: 0 };
  private readonly sums = { normal: 0, tangential: 0, normalMoment: 0, tangentialMoment: 0, modal: 0 };
  private readonly steady = emptyFlow();

  /** @throws Error when the turbine's rotor is given by tables, or its blade cannot be built */
  constructor(turbine: Turbine, options: BladeElementOptions = BLADE_ELEMENT_DEFAULTS) {
    const { rotor } = turbine;
    const blade = bladeOf(rotor, options.sections);
    const { sections } = blade;
    this.blade = blade;
    this.bladeCount = rotor.bladeCount;
    this.sectionCount = sections.length;
    this.airDensity = turbine.airDensity;
    this.tipRadius = rotor.radius;
    this.hubRadius = rotor.hubRadius;
    this.overhang = rotor.overhang ?? 0;
    this.tower = towerShapeOf(turbine);
    this.sinTilt = Math.sin(rotor.tilt ?? 0);
    this.cosTilt = Math.cos(rotor.tilt ?? 0);
    this.sinCone = Math.sin(rotor.cone ?? 0);
    this.cosCone = Math.cos(rotor.cone ?? 0);
    this.isDynamic = options.wake === 'dynamic';
    this.lags = options.sectionLift === 'lagging';
    this.flap = rotor.structure ? new BladeFlap(rotor) : undefined;
    const flap = this.flap;

    const column = (value: (i: number) => number) => Float64Array.from(sections, (_, i) => value(i));
    this.radius = column((i) => sections[i].radius);
    this.pressure = column((i) => 0.5 * turbine.airDensity * sections[i].chord * sections[i].width);
    this.chord = column((i) => sections[i].chord);
    this.twist = column((i) => sections[i].twist);
    this.solidity = column((i) => solidityAt(rotor.bladeCount, sections[i].chord, sections[i].radius));
    // Prandtl's exponents are these squared over |sin φ|.
    const half = 0.5 * rotor.bladeCount;
    this.tipExponent = column((i) => Math.sqrt((half * (rotor.radius - sections[i].radius)) / sections[i].radius));
    this.hubExponent = column((i) => Math.sqrt((half * (sections[i].radius - rotor.hubRadius)) / rotor.hubRadius));
    this.rateRatio = column((i) => lateRateRatio(sections[i].radius / rotor.radius));
    this.shape = column((i) => flap?.shapeAt(sections[i].radius) ?? 0);
    this.attached = sections.map(({ airfoil }) => attachedFlow(airfoil));
    this.nodes = sections.map(({ airfoil }) => airfoil.nodes);
    this.freeNormal = column(() => 0);
    this.freeTangential = column(() => 0);
    this.speed = column(() => 0);
    this.lift = column(() => 0);
    this.drag = column(() => 0);
    this.normalLoad = column(() => 0);
    this.tangentialLoad = column(() => 0);

    if (this.isDynamic) for (const name of WAKE_STATES) this.declare(name, WAKE_SCALE);
    this.lagAt = this.lags ? this.declare('attached share', 1) : this.stateNames.length;
    this.flapAt = this.stateNames.length;
    this.flapRateAt = this.flapAt + this.bladeCount;
    if (flap) {
      for (const name of ['flap deflection', 'flap velocity']) {
        for (let b = 0; b < this.bladeCount; b++) this.stateNames.push(`blade ${b + 1}: ${name}`);
      }
      for (let b = 0; b < 2 * this.bladeCount; b++) this.stateScales.push(1);
    }
    this.carried = new Float64Array(4 * this.bladeCount);
    this.asked = new Float64Array(6 + this.bladeCount).fill(Number.NaN);
    this.answer = emptyLoads(this.bladeCount);
    this.own = new Float64Array(this.stateNames.length);
    this.rate = new Float64Array(this.stateNames.length);
    const flow = () => new Float64Array(this.bladeCount * this.sectionCount);
    this.flows = {
      sectionCount: this.sectionCount,
      angleOfAttack: flow(),
      normalSpeed: flow(),
      tangentialSpeed: flow(),
      axialInduced: flow(),
      tangentialInduced: flow(),
    };
  }

  /** Declares one state per section of every blade and returns the offset of the first. */
  private declare(name: string, scale: number): number {
    const at = this.stateNames.length;
    for (let b = 0; b < this.bladeCount; b++) {
      for (let i = 0; i < this.sectionCount; i++) {
        this.stateNames.push(`blade ${b + 1}, section ${i + 1}: ${name}`);
        this.stateScales.push(scale);
      }
    }
    return at;
  }

  /** The rotor's own states at rest in uniform wind along its axis; arguments as in `steadyLoads`. */
  settledStates(windSpeed: number, rotorSpeed: number, pitch: number): Float64Array {
    const states = new Float64Array(this.stateNames.length);
    const { steady, blade, flap } = this;
    const cells = this.bladeCount * this.sectionCount;
    let modal = 0;
    for (let i = 0; i < this.sectionCount; i++) {
      const section = blade.sections[i];
      solveSection(section, blade, windSpeed, rotorSpeed, pitch, this.airDensity, FULL_MOMENTUM, steady);
      modal += this.shape[i] * steady.normalForce * section.width;
      const axial = windSpeed - steady.normalSpeed;
      const tangential = steady.tangentialSpeed - rotorSpeed * section.radius;
      const { slope, zeroLiftAngle } = this.attached[i];
      const inviscid = slope * Math.sin(steady.angleOfAttack - zeroLiftAngle);
      for (let b = 0; b < this.bladeCount; b++) {
        const at = b * this.sectionCount + i;
        if (this.isDynamic) {
          states[at] = (1 - WAKE_SHARE) * axial;
          states[at + cells] = axial;
          states[at + 2 * cells] = (1 - WAKE_SHARE) * tangential;
          states[at + 3 * cells] = tangential;
        }
        if (this.lags) states[this.lagAt + at] = staticAttachment(steady.lift, inviscid);
      }
    }
    if (flap) states.fill(flap.restingAt(modal, rotorSpeed), this.flapAt, this.flapRateAt);
    return states;
  }

  steadyLoads(windSpeed: number, rotorSpeed: number, pitch: number, out: Pick<RotorLoads, 'torque' | 'thrust'>): void {
    const { torque, thrust } = steadyRotor(this.blade, windSpeed, rotorSpeed, pitch, this.airDensity);
    out.torque = torque;
    out.thrust = thrust;
  }

  loads(
    t: number,
    wind: WindField,
    motion: RotorMotion,
    x: ArrayLike<number>,
    stateAt: number,
    pitchAt: ArrayLike<number>,
    dx: { [i: number]: number },
    out: RotorLoads,
  ): void {
    const { rate, bladeCount, answer } = this;
    if (this.isNewQuestion(t, wind, motion, x, stateAt, pitchAt)) {
      clear(answer);
      wind.velocity(t, 0, 0, this.hubWind);
      const throughRotor = this.hubWind[0] * Math.cos(motion.heading) + this.hubWind[1] * Math.sin(motion.heading);
      for (let b = 0; b < bladeCount; b++) {
        this.turnAxes(b, motion.azimuth);
        this.meet(b, t, wind, motion);
        this.drawTriangles(b, x[pitchAt[b]]);
        this.readPolars(b);
        if (this.lags) this.lagLift(b);
        this.sumLoads(b);
        if (this.isDynamic) this.blowWake(b, throughRotor);
        this.addBlade(b, motion, answer);
      }
    }
    copyLoads(answer, out);
    for (let i = 0; i < rate.length; i++) dx[stateAt + i] = rate[i];
  }

  /**
   * Takes note of the question, and tells whether it differs from the last one. The clock looks at the machine at every
   * tick and the integrator starts from there: a fifth of all questions are asked twice in a row.
   */
  private isNewQuestion(
    t: number,
    wind: WindField,
    motion: RotorMotion,
    x: ArrayLike<number>,
    stateAt: number,
    pitchAt: ArrayLike<number>,
  ): boolean {
    const { own, asked } = this;
    let isNew = wind !== this.askedWind;
    this.askedWind = wind;
    const { azimuth, speed, foreAft, sideSide, heading } = motion;
    isNew ||= asked[0] !== t || asked[1] !== azimuth || asked[2] !== speed;
    isNew ||= asked[3] !== foreAft || asked[4] !== sideSide || asked[5] !== heading;
    asked[0] = t;
    asked[1] = azimuth;
    asked[2] = speed;
    asked[3] = foreAft;
    asked[4] = sideSide;
    asked[5] = heading;
    for (let b = 0; b < this.bladeCount; b++) {
      const pitch = x[pitchAt[b]];
      if (asked[6 + b] !== pitch) isNew = true;
      asked[6 + b] = pitch;
    }
    for (let i = 0; i < own.length; i++) {
      const value = x[stateAt + i];
      if (own[i] !== value) isNew = true;
      own[i] = value;
    }
    return isNew;
  }

  /** Axes of blade `b` in the nacelle's frame: along the blade, normal to it downwind, and where it turns. */
  private turnAxes(b: number, azimuth: number): void {
    const { sinTilt, cosTilt, sinCone, cosCone } = this;
    const { along, normal, turning } = this.axes;
    const psi = azimuth + (2 * Math.PI * b) / this.bladeCount;
    const sin = Math.sin(psi);
    const cos = Math.cos(psi);
    along[0] = cosCone * cos * sinTilt - sinCone * cosTilt;
    along[1] = -cosCone * sin;
    along[2] = cosCone * cos * cosTilt + sinCone * sinTilt;
    normal[0] = cosCone * cosTilt + sinCone * cos * sinTilt;
    normal[1] = -sinCone * sin;
    normal[2] = -cosCone * sinTilt + sinCone * cos * cosTilt;
    turning[0] = -sin * sinTilt;
    turning[1] = -cos;
    turning[2] = -sin * cosTilt;
  }

  /**
   * Wind against every section of blade `b` without what the rotor induces: normal to blade and turning, downwind, and
   * against the turning, into `freeNormal` and `freeTangential`.
   */
  private meet(b: number, t: number, wind: WindField, motion: RotorMotion): void {
    const { sectionCount, radius, shape, sectionWind, hubWind, freeNormal, freeTangential } = this;
    const { normal, turning } = this.axes;
    const sinHeading = Math.sin(motion.heading);
    const cosHeading = Math.cos(motion.heading);
    const normalMotion = motion.foreAft * normal[0] + motion.sideSide * normal[1];
    const turningMotion = motion.foreAft * turning[0] + motion.sideSide * turning[1];
    const edgeRate = motion.speed * this.cosCone;
    const flapVelocity = this.flap ? this.own[this.flapRateAt + b] : 0;
    const uniform = wind.uniform === true;
    const sampled = !uniform || this.tower !== undefined;
    if (!sampled) turnIntoNacelle(hubWind, sinHeading, cosHeading, sectionWind);
    for (let i = 0; i < sectionCount; i++) {
      if (sampled) this.windAt(t, wind, uniform, radius[i], sinHeading, cosHeading);
      const blowing = sectionWind[0] * normal[0] + sectionWind[1] * normal[1] + sectionWind[2] * normal[2];
      const along = sectionWind[0] * turning[0] + sectionWind[1] * turning[1] + sectionWind[2] * turning[2];
      freeNormal[i] = blowing - normalMotion - flapVelocity * shape[i];
      freeTangential[i] = edgeRate * radius[i] + turningMotion - along;
    }
  }

  /** Wind at radius `r` of the blade whose axes are set, in the nacelle's frame, into `sectionWind`. */
  private windAt(
    t: number,
    wind: WindField,
    uniform: boolean,
    r: number,
    sinHeading: number,
    cosHeading: number,
  ): void {
    const { sectionWind, hubWind, tower } = this;
    const { along } = this.axes;
    const x = r * along[0] - this.overhang;
    const y = r * along[1];
    const z = r * along[2];
    if (uniform) {
      turnIntoNacelle(hubWind, sinHeading, cosHeading, sectionWind);
    } else {
      wind.velocity(t, y * cosHeading + x * sinHeading, z, sectionWind);
      turnIntoNacelle(sectionWind, sinHeading, cosHeading, sectionWind);
    }
    if (tower) addTowerShadow(tower, x, y, z, sectionWind);
  }

  /** Velocity triangles of blade `b`: φ = atan2(v_n, v_t), α = φ − twist − θ. */
  private drawTriangles(b: number, pitch: number): void {
    const { sectionCount, own, twist, freeNormal, freeTangential, speed } = this;
    const { angleOfAttack, normalSpeed, tangentialSpeed, axialInduced, tangentialInduced } = this.flows;
    const cells = this.bladeCount * sectionCount;
    for (let i = 0; i < sectionCount; i++) {
      const at = b * sectionCount + i;
      if (this.isDynamic) {
        axialInduced[at] = own[at + cells];
        tangentialInduced[at] = own[at + 3 * cells];
      } else {
        this.balanceSection(i, at, pitch);
      }
      const normal = freeNormal[i] - axialInduced[at];
      const tangential = freeTangential[i] + tangentialInduced[at];
      normalSpeed[at] = normal;
      tangentialSpeed[at] = tangential;
      speed[i] = Math.sqrt(normal * normal + tangential * tangential);
      angleOfAttack[at] = Math.atan2(normal, tangential) - twist[i] - pitch;
    }
  }

  /** Induced velocities that balance the section at once. */
  private balanceSection(i: number, at: number, pitch: number): void {
    const { steady, blade, flows } = this;
    const turningRate = this.freeTangential[i] / this.radius[i];
    solveSection(blade.sections[i], blade, this.freeNormal[i], turningRate, pitch, 1, FULL_MOMENTUM, steady);
    flows.axialInduced[at] = this.freeNormal[i] - steady.normalSpeed;
    flows.tangentialInduced[at] = steady.tangentialSpeed - this.freeTangential[i];
  }

  /** Lift and drag coefficients of blade `b`, into `lift` and `drag`. */
  private readPolars(b: number): void {
    const { sectionCount, nodes, coefficients, lift, drag } = this;
    const { angleOfAttack } = this.flows;
    for (let i = 0; i < sectionCount; i++) {
      coefficientsFrom(nodes[i], angleOfAttack[b * sectionCount + i], coefficients);
      lift[i] = coefficients.lift;
      drag[i] = coefficients.drag;
    }
  }

  /** Puts the lagging lift in the place of the steady one. */
  private lagLift(b: number): void {
    const { sectionCount, own, rate, lift, speed, chord } = this;
    for (let i = 0; i < sectionCount; i++) {
      const at = b * sectionCount + i;
      const { slope, zeroLiftAngle } = this.attached[i];
      const inviscid = slope * Math.sin(this.flows.angleOfAttack[at] - zeroLiftAngle);
      const settled = staticAttachment(lift[i], inviscid);
      const share = own[this.lagAt + at];
      lift[i] = laggedLift(lift[i], inviscid, settled, share);
      rate[this.lagAt + at] = ((settled - share) * speed[i]) / (LAG_CHORDS * chord[i]);
    }
  }

  /**
   * Loads of blade `b`: ½ρW²c (C_l cos φ + C_d sin φ) and ½ρW²c (C_l sin φ − C_d cos φ) a metre; their coefficients
   * times W into `normalLoad` and `tangentialLoad`, their sums into `sums`.
   */
  private sumLoads(b: number): void {
    const { sectionCount, radius, pressure, shape, hubRadius, lift, drag, speed, normalLoad, tangentialLoad } = this;
    const { normalSpeed, tangentialSpeed } = this.flows;
    const { sums } = this;
    let normal = 0;
    let tangential = 0;
    let normalMoment = 0;
    let tangentialMoment = 0;
    let modal = 0;
    for (let i = 0; i < sectionCount; i++) {
      const vn = normalSpeed[b * sectionCount + i];
      const vt = tangentialSpeed[b * sectionCount + i];
      const along = lift[i] * vt + drag[i] * vn;
      const across = lift[i] * vn - drag[i] * vt;
      const normalForce = pressure[i] * speed[i] * along;
      const tangentialForce = pressure[i] * speed[i] * across;
      const arm = radius[i] - hubRadius;
      normalLoad[i] = along;
      tangentialLoad[i] = across;
      normal += normalForce;
      tangential += tangentialForce;
      normalMoment += normalForce * arm;
      tangentialMoment += tangentialForce * arm;
      modal += normalForce * shape[i];
    }
    sums.normal = normal;
    sums.tangential = tangential;
    sums.normalMoment = normalMoment;
    sums.tangentialMoment = tangentialMoment;
    sums.modal = modal;
  }

  /** Rates of the wake of blade `b`, towards what the momentum balance asks for the present loads. */
  private blowWake(b: number, throughRotor: number): void {
    const { sectionCount, own, rate, speed, normalLoad, tangentialLoad, solidity, rateRatio, tipRadius } = this;
    const { tipExponent, hubExponent } = this;
    const { normalSpeed, axialInduced, tangentialInduced } = this.flows;
    const cells = this.bladeCount * sectionCount;
    for (let i = 0; i < sectionCount; i++) {
      const at = b * sectionCount + i;
      let axialSettled = 0;
      let tangentialSettled = 0;
      if (speed[i] > 0) {
        const perSpeed = 1 / speed[i];
        const sin = normalSpeed[at] * perSpeed;
        const spread = 1 / Math.sqrt(Math.abs(sin));
        const loss = Math.max(lossAt(tipExponent[i] * spread) * lossAt(hubExponent[i] * spread), LEAST_LOSS_FACTOR);
        const normal = solidity[i] * normalLoad[i] * perSpeed;
        const tangential = solidity[i] * tangentialLoad[i] * perSpeed;
        const stream = axialStream(normal, sin, loss);
        axialSettled = speed[i] * (stream - sin);
        tangentialSettled = speed[i] * swirlSpeed(normal, tangential, sin, loss, stream);
      }
      const early = wakeRate(tipRadius, throughRotor, axialInduced[at]);
      const late = rateRatio[i] * early;
      rate[at] = early * ((1 - WAKE_SHARE) * axialSettled - own[at]);
      rate[at + cells] = late * (own[at] + WAKE_SHARE * axialSettled - axialInduced[at]);
      rate[at + 2 * cells] = early * ((1 - WAKE_SHARE) * tangentialSettled - own[at + 2 * cells]);
      rate[at + 3 * cells] = late * (own[at + 2 * cells] + WAKE_SHARE * tangentialSettled - tangentialInduced[at]);
    }
  }

  /** Adds what the sums of blade `b` do to the hub, and its bending. */
  private addBlade(b: number, motion: RotorMotion, out: RotorLoads): void {
    const { sums, hubRadius, overhang } = this;
    const { along, normal, turning } = this.axes;
    this.carried[4 * b] = normal[0];
    this.carried[4 * b + 1] = normal[1];
    this.carried[4 * b + 2] = turning[0];
    this.carried[4 * b + 3] = turning[1];
    const atAxis = sums.tangentialMoment + hubRadius * sums.tangential;
    const normalAtAxis = sums.normalMoment + hubRadius * sums.normal;
    const forceX = sums.normal * normal[0] + sums.tangential * turning[0];
    const forceY = sums.normal * normal[1] + sums.tangential * turning[1];
    const forceZ = sums.normal * normal[2] + sums.tangential * turning[2];
    out.torque += atAxis * this.cosCone;
    out.thrust += forceX;
    out.sideForce += forceY;
    // Along × (normal, turning) = (−turning, normal); the hub stands `overhang` before the tower.
    out.tiltMoment += normal[1] * atAxis - turning[1] * normalAtAxis + overhang * forceZ;
    out.yawMoment += normal[2] * atAxis - turning[2] * normalAtAxis - overhang * forceY;
    out.flapMoment[b] = sums.normalMoment;
    out.edgeMoment[b] = sums.tangentialMoment;
    if (this.flap) this.bend(this.flap, b, motion.speed, along[2], normal[2], turning[2], out);
  }

  private bend(
    flap: BladeFlap,
    b: number,
    speed: number,
    bladeUp: number,
    normalUp: number,
    turningUp: number,
    out: RotorLoads,
  ): void {
    const { own, rate, sums, sinCone, cosCone } = this;
    const q = own[this.flapAt + b];
    const velocity = own[this.flapRateAt + b];
    const force = sums.modal + flap.ownForce(q, speed, bladeUp, normalUp) - flap.damping * velocity;
    const free = force / flap.modalMass;
    rate[this.flapAt + b] = velocity;
    rate[this.flapRateAt + b] = free;
    out.bendingPower += sums.modal * velocity;
    out.lostPower += flap.damping * velocity * velocity;
    out.inertiaChange += flap.inertiaChange(q);
    // d/dt of the changing inertia, and the weight of a blade bent out of its plane.
    out.inertialTorque +=
      -speed * flap.inertiaSlope(q) * velocity +
      (0.5 * flap.weightStiffness * q * q * cosCone - flap.weightForce * q * sinCone) * turningUp;
    out.inertialThrust -= flap.towerCoupling * free;
    out.massChange -= flap.towerCoupling ** 2 / flap.modalMass;
    // Root moments: air, weight, and the centrifugal force with its arm.
    out.flapMoment[b] +=
      -flap.weightMoment * normalUp +
      flap.weightForce * bladeUp * q +
      speed * speed * (sinCone * cosCone * flap.inertiaMoment - flap.radiusMoment * q);
    out.edgeMoment[b] -= flap.weightMoment * turningUp;
  }

  follow(
    carrier: RotorCarrier,
    _motion: RotorMotion,
    _x: ArrayLike<number>,
    stateAt: number,
    dx: { [i: number]: number },
    out: RotorLoads,
  ): void {
    const { flap, cosCone, carried } = this;
    if (!flap) return;
    for (let b = 0; b < this.bladeCount; b++) {
      const at = stateAt + this.flapRateAt + b;
      dx[at] -= (flap.towerCoupling / flap.modalMass) * carrier.foreAft;
      const normalAcceleration = carrier.foreAft * carried[4 * b] + carrier.sideSide * carried[4 * b + 1];
      const turningAcceleration = carrier.foreAft * carried[4 * b + 2] + carrier.sideSide * carried[4 * b + 3];
      out.flapMoment[b] -= flap.massMoment * normalAcceleration + flap.shapeMoment * dx[at];
      out.edgeMoment[b] -= flap.massMoment * turningAcceleration + flap.inertiaMoment * cosCone * carrier.speed;
    }
  }

  storedEnergy(motion: RotorMotion, x: ArrayLike<number>, stateAt: number): number {
    const { flap } = this;
    if (!flap) return 0;
    const { along, normal } = this.axes;
    let energy = 0;
    for (let b = 0; b < this.bladeCount; b++) {
      this.turnAxes(b, motion.azimuth);
      const q = x[stateAt + this.flapAt + b];
      const velocity = x[stateAt + this.flapRateAt + b];
      energy +=
        0.5 * flap.modalMass * velocity * velocity +
        flap.towerCoupling * motion.foreAft * velocity +
        0.5 * flap.inertiaChange(q) * motion.speed * motion.speed +
        flap.potentialEnergy(q, along[2], normal[2]);
    }
    return energy;
  }
}

/** Turns a wind from the field's frame into the nacelle's. `out` may be `wind`. */
function turnIntoNacelle(wind: Float64Array, sinHeading: number, cosHeading: number, out: Float64Array): void {
  const u = wind[0];
  const v = wind[1];
  out[0] = u * cosHeading + v * sinHeading;
  out[1] = v * cosHeading - u * sinHeading;
  out[2] = wind[2];
}

function towerShapeOf({ tower, rotor }: Turbine): TowerShape | undefined {
  const { topDiameter, baseDiameter = topDiameter } = tower;
  if (topDiameter === undefined || baseDiameter === undefined) return undefined;
  return { topDiameter, baseDiameter, hubHeight: rotor.hubHeight };
}

/** Sums start from nothing; root moments are written blade by blade. */
function clear(out: RotorLoads): void {
  out.torque = 0;
  out.thrust = 0;
  out.sideForce = 0;
  out.tiltMoment = 0;
  out.yawMoment = 0;
  out.bendingPower = 0;
  out.lostPower = 0;
  out.inertialTorque = 0;
  out.inertiaChange = 0;
  out.inertialThrust = 0;
  out.massChange = 0;
}

function copyLoads(from: RotorLoads, to: RotorLoads): void {
  to.torque = from.torque;
  to.thrust = from.thrust;
  to.sideForce = from.sideForce;
  to.tiltMoment = from.tiltMoment;
  to.yawMoment = from.yawMoment;
  to.bendingPower = from.bendingPower;
  to.lostPower = from.lostPower;
  to.inertialTorque = from.inertialTorque;
  to.inertiaChange = from.inertiaChange;
  to.inertialThrust = from.inertialThrust;
  to.massChange = from.massChange;
  for (let b = 0; b < from.flapMoment.length; b++) {
    to.flapMoment[b] = from.flapMoment[b];
    to.edgeMoment[b] = from.edgeMoment[b];
  }
}
