/** Where a rotor that remembers (wake, bending blades) settles: the steady or periodic state that a run starts from. */
import { Drivetrain } from './drivetrain.ts';
import { rungeKutta } from './integrators/runge-kutta.ts';
import { Layout } from './layout.ts';
import type { SteadyState } from './plant.ts';
import { emptyLoads, type Rotor, stillMotion } from './rotor.ts';
import type { Turbine } from './turbine.ts';
import type { WindField } from './wind/wind.ts';

export interface StartQuestion {
  turbine: Turbine;
  rotor: Rotor;
  /** Its field at time 0 stands still, scaled to `windSpeed` (m/s) at the hub. */
  wind: WindField;
  windSpeed: number;
  /** rad */
  yawError: number;
  /** Where the rotor would be in uniform wind along its axis, with its own states there. */
  guess: SteadyState & { rotorStates: Float64Array };
  /** Torque (N m) that the control law settles on at a generator speed (rad/s), where it is known. */
  torqueCurve?: (generatorSpeed: number) => number;
}

const STEPS_PER_TURN = 72;
/** Of a rotor that hardly turns, s. */
const LONGEST_STEP = 0.07;
const PARKED_TIME = 60;
const MOST_TURNS = 60;
const MOST_TRIALS = 12;
/** A turn's mean torque, of the rated torque, that no longer moves, and the balance that is near enough. */
const SETTLED = 1e-6;
const BALANCED = 1e-5;

/**
 * The state on which the machine settles in the frozen wind: at rated torque by pitch, else on the torque curve by
 * speed. Tower and shaft speed are held while the rotor turns; only means over a turn count.
 */
export function settledStart(question: StartQuestion): SteadyState {
  const { guess, yawError } = question;
  const alone = new RotorAlone(question);
  const found = guess.rotorSpeed === 0 ? alone.stand(guess.pitch) : new OperatingSearch(question, alone).find();
  const { thrust, sideForce } = alone.means;
  return { ...guess, ...found, thrust, sideForce, yawError, rotorStates: alone.states() };
}

/** The rotor on a rigid tower at a given speed and pitch, turning until each turn is like the last. */
class RotorAlone {
  readonly means = { torque: 0, thrust: 0, sideForce: 0 };
  private readonly rotor: Rotor;
  private readonly ratedTorque: number;
  private readonly x: Float64Array;
  private readonly pitchAt: Int32Array;
  private readonly motion = stillMotion();
  private readonly loads;
  private readonly derivative: (t: number, x: ArrayLike<number>, dx: { [i: number]: number }) => void;

  constructor({ turbine, rotor, wind, windSpeed, yawError, guess }: StartQuestion) {
    const { bladeCount } = turbine.rotor;
    const own = rotor.stateNames.length;
    const field = frozenWind(wind, windSpeed);
    this.rotor = rotor;
    this.ratedTorque = turbine.ratings.power / turbine.ratings.rotorSpeed;
    this.x = new Float64Array(own + bladeCount);
    this.x.set(guess.rotorStates);
    this.pitchAt = Int32Array.from({ length: bladeCount }, (_, b) => own + b);
    this.loads = emptyLoads(bladeCount);
    this.motion.heading = (wind.direction?.(0) ?? 0) - yawError;
    this.derivative = (t, x, dx) => {
      this.motion.azimuth = this.motion.speed * t;
      rotor.loads(0, field, this.motion, x, 0, this.pitchAt, dx, this.loads);
    };
  }

  states(): Float64Array {
    return this.x.slice(0, this.rotor.stateNames.length);
  }

  /** Settles at a rotor speed (rad/s) and pitch (rad) and returns the mean torque, N m. */
  turn(speed: number, pitch: number): number {
    this.x.fill(pitch, this.rotor.stateNames.length);
    this.motion.speed = speed;
    const turn = (2 * Math.PI) / speed;
    const steps = Math.max(STEPS_PER_TURN, Math.ceil(turn / LONGEST_STEP));
    let last = Number.NaN;
    for (let i = 0; i < MOST_TURNS; i++) {
      this.meanOver(turn, steps);
      if (Math.abs(this.means.torque - last) < SETTLED * this.ratedTorque) break;
      last = this.means.torque;
    }
    return this.means.torque;
  }

  stand(pitch: number): { rotorSpeed: number; pitch: number } {
    this.x.fill(pitch, this.rotor.stateNames.length);
    this.motion.speed = 0;
    const steps = Math.ceil(PARKED_TIME / LONGEST_STEP);
    this.meanOver(PARKED_TIME, steps);
    this.meanOver(LONGEST_STEP, 1);
    return { rotorSpeed: 0, pitch };
  }

  /** Integrates over `length` (s) in equal steps and takes the means of the loads at their starts. */
  private meanOver(length: number, steps: number): void {
    const step = length / steps;
    const { means, loads, x } = this;
    const integrator = rungeKutta(this.derivative, x.length, step);
    const slope = new Float64Array(x.length);
    means.torque = means.thrust = means.sideForce = 0;
    for (let k = 0; k < steps; k++) {
      this.derivative(k * step, x, slope);
      means.torque += loads.torque / steps;
      means.thrust += loads.thrust / steps;
      means.sideForce += loads.sideForce / steps;
      integrator.advance(k * step, (k + 1) * step, x);
    }
  }
}

/** Finds the pitch, or the speed, at which the mean torque meets losses and generator. */
class OperatingSearch {
  private readonly question: StartQuestion;
  private readonly alone: RotorAlone;
  private readonly drivetrain: Drivetrain;
  private readonly ratedTorque: number;

  constructor(question: StartQuestion, alone: RotorAlone) {
    const { power, rotorSpeed } = question.turbine.ratings;
    const { gearRatio } = question.turbine.drivetrain;
    this.question = question;
    this.alone = alone;
    this.drivetrain = new Drivetrain(question.turbine.drivetrain, new Layout());
    this.ratedTorque = power / (question.turbine.generator.efficiency * rotorSpeed * gearRatio);
  }

  find(): Pick<SteadyState, 'rotorSpeed' | 'pitch' | 'generatorTorque' | 'shaftTorque'> {
    const { guess, turbine, torqueCurve } = this.question;
    const { rotorSpeed: rated, finePitch } = turbine.ratings;
    let { rotorSpeed, pitch } = guess;
    if (pitch > finePitch) {
      pitch = this.solve(pitch, 0.005, finePitch, turbine.pitchDrive.feather, (p) =>
        this.spare(rated, p, this.ratedTorque),
      );
    }
    if (pitch <= finePitch && torqueCurve) {
      const { gearRatio } = turbine.drivetrain;
      rotorSpeed = this.solve(rotorSpeed, 0.01 * rated, 0.2 * rated, rated, (speed) =>
        this.spare(speed, pitch, torqueCurve(speed * gearRatio)),
      );
    }
    const torque = this.alone.turn(rotorSpeed, pitch);
    const shaftTorque = torque - this.drivetrain.lossTorque(rotorSpeed);
    return {
      rotorSpeed,
      pitch,
      shaftTorque,
      generatorTorque: Math.max(this.drivetrain.throughGearbox(shaftTorque), 0),
    };
  }

  /** Torque left over for speeding up, as a share of the rated torque. */
  private spare(speed: number, pitch: number, generatorTorque: number): number {
    const left = this.alone.turn(speed, pitch) - this.drivetrain.lossTorque(speed);
    return (this.drivetrain.throughGearbox(left) - generatorTorque) / this.ratedTorque;
  }

  /** Secant steps to a root of `spare`, which falls, within [low, high]; the bound where the root lies beyond. */
  private solve(start: number, step: number, low: number, high: number, spare: (at: number) => number): number {
    const within = (at: number) => Math.min(Math.max(at, low), high);
    let last = within(start);
    let lastSpare = spare(last);
    let at = within(last + Math.sign(lastSpare) * step);
    for (let i = 0; i < MOST_TRIALS && at !== last && Math.abs(lastSpare) > BALANCED; i++) {
      const now = spare(at);
      const slope = (now - lastSpare) / (at - last);
      last = at;
      lastSpare = now;
      at = slope < 0 ? within(at - now / slope) : within(at + Math.sign(now) * step);
    }
    return last;
  }
}

/** The field at time 0 for ever, scaled to `speed` (m/s) at the hub; uniform where nothing blows at the hub. */
function frozenWind(wind: WindField, speed: number): WindField {
  const hub = new Float64Array(3);
  wind.velocity(0, 0, 0, hub);
  const present = Math.hypot(hub[0], hub[1]);
  const scale = present > 0 ? speed / present : 1;
  return {
    ...wind,
    velocity(_t, y, z, out) {
      wind.velocity(0, y, z, out);
      for (let i = 0; i < 3; i++) out[i] *= scale;
    },
    rotorMean: () => wind.rotorMean(0) * scale,
    breakpoints: () => [],
    marks: () => [],
  };
}
