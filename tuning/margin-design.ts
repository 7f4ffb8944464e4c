/** Gains by margin over the whole rated region: per wind speed, then one schedule, then proof between the points. */
import type { Controller, Machine } from '../controllers/contract.ts';
import { type GainScheduleSettings, gainSchedule } from '../controllers/gain-schedule.ts';
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import type { Turbine } from '../sim/turbine.ts';
import { type Complex, exponential, modulus } from './complex.ts';
import type { Gains } from './gains-by-formula.ts';
import {
  type FastestGain,
  fastestOf,
  integralGain,
  type Kept,
  keptAt,
  largestGain,
  type MarginAsk,
  type UnitLoop,
  type WindTask,
} from './gains-by-margin.ts';
import { machineSpread, type Spread, type SpreadPlant } from './machine-spread.ts';
import { frequencyGrid } from './margins.ts';
import { type Mode, modesOf, sampledModesOf } from './modes.ts';
import { sampledLaw } from './sampled-law.ts';
import { lawResponse, loopGain, SampledLoop, type SensedPlant } from './sampled-loop.ts';
import { type ScheduleFit, scheduleFits, smallestFit } from './schedule-fit.ts';
import { eigenvalues } from './transmission-zeros.ts';

export interface MarginDesignTask {
  turbine: Turbine;
  machine: Machine;
  surface: CoefficientSurface;
  /** The controller with other gains and schedule, all else as it is. */
  controllerWith: (gains: Gains, schedule: GainScheduleSettings) => Controller;
  ask: MarginAsk;
  spread: Spread;
  /** Wind speeds to design at, and to prove the result at, m/s, rising. */
  winds: readonly number[];
  proofWinds: readonly number[];
}

export interface WindResult {
  windSpeed: number;
  pitch: number;
  /** The fastest at this wind speed alone, with an integral time of its own. */
  alone: FastestGain;
  /** The largest gain at the common integral time. */
  common: FastestGain;
}

export interface ProofPoint {
  windSpeed: number;
  pitch: number;
  kept: Kept;
}

export interface MarginDesign {
  gains: Gains;
  schedule: GainScheduleSettings;
  fit: ScheduleFit;
  fits: readonly ScheduleFit[];
  integralTime: number;
  winds: readonly WindResult[];
  proof: readonly ProofPoint[];
  tightest: ProofPoint;
}

/** No gain meets what was asked, at the wind speed that is named. */
export class NoGainError extends Error {
  override readonly name = 'NoGainError';
}

const INTEGRAL_TIMES = Array.from({ length: 12 }, (_, i) => 1.2 * 1.25 ** i);
/** Part of each margin kept back in the design, for what lies between grid points and between wind speeds. */
const RESERVE = 0.01;
/** A larger schedule is taken where the smaller one costs more than this much of the gain on average. */
const WORTH = 0.08;
const MOST_LOWERINGS = 25;
const LOWERING = 0.985;
const FLAT: GainScheduleSettings = { kind: 'constant' };

/**
 * @throws NoGainError where no gain keeps the asked margins at some wind speed, with the best that was found
 * @throws RangeError where the machine grows a swing with its pitch held, or fewer than two wind speeds are in the rated region
 */
export function designByMargin(task: MarginDesignTask): MarginDesign {
  const relatives = machineSpread(task.turbine, task.surface, task.spread);
  const sensed = (winds: readonly number[]) =>
    winds.flatMap((windSpeed) => sensedWind(task, windSpeed, relatives.at(windSpeed)));
  const designed = sensed(task.winds);
  if (designed.length < 2) throw new RangeError('fewer than two of the wind speeds lie in the rated region');
  const ask = withReserve(task.ask);
  const tasks = designed.map((wind) => windTask(task, wind, FLAT));
  const byTime = INTEGRAL_TIMES.map((integralTime) => tasks.map((wind) => largestGain(wind, integralTime, ask)));
  const alone = tasks.map((wind, i) => {
    const found = fastestOf(byTime.map((row) => row[i]));
    if (found.kept.use > 1) throw new NoGainError(noGainText(wind, found, task.ask));
    return found;
  });

  const proven = sensed(task.proofWinds);
  const flat = proven.map((wind) => windTask(task, wind, FLAT));
  let missed: ProofPoint | undefined;
  for (const common of byTime.filter(allMet).toSorted(fasterFirst)) {
    const { integralTime } = common[0];
    const fits = scheduleFits(
      tasks.map(({ pitch }, i) => ({ pitch, gain: common[i].proportional })),
      'below',
    );
    const fit = smallestFit(fits, WORTH, 'meanError');
    const factor = gainSchedule(fit.schedule);
    const guess = prove(flat, fit.gain, integralTime, task.ask, factor);
    if (guess.tightest.kept.use > 1) {
      if (!missed || guess.tightest.kept.use < missed.kept.use) missed = guess.tightest;
      continue;
    }
    const scheduled = proven.map((wind) => windTask(task, wind, fit.schedule));
    const { gain, proof, tightest } = prove(scheduled, guess.gain, integralTime, task.ask);
    if (tightest.kept.use > 1) {
      missed = tightest;
      continue;
    }
    const gains = { proportional: gain, integral: gain / integralTime };
    for (const wind of proven) requireStable(task, wind, gains, fit.schedule);
    const winds = tasks.map(({ windSpeed, pitch }, i) => ({ windSpeed, pitch, alone: alone[i], common: common[i] }));
    return { gains, schedule: fit.schedule, fit, fits, integralTime, winds, proof, tightest };
  }
  if (missed) throw new NoGainError(proofText(missed, task.ask));
  throw new NoGainError('each wind speed has gains that keep the margins, but no one integral time serves them all');
}

function allMet(row: readonly FastestGain[]): boolean {
  return row.every(({ kept }) => kept.use <= 1);
}

/** By the integral gains over all wind speeds, on average of their logarithms. */
function fasterFirst(a: readonly FastestGain[], b: readonly FastestGain[]): number {
  const speed = (row: readonly FastestGain[]) => row.reduce((sum, found) => sum + Math.log(integralGain(found)), 0);
  return speed(b) - speed(a);
}

/** Lowers the gain until the margins are kept everywhere, or for as long as that helps. */
function prove(
  winds: readonly WindTask[],
  start: number,
  integralTime: number,
  ask: MarginAsk,
  factorAt?: (pitch: number) => number,
): { gain: number; proof: ProofPoint[]; tightest: ProofPoint } {
  const at = (gain: number) => {
    const proof = winds.map((wind): ProofPoint => {
      const kept = keptAt(wind, gain, integralTime, ask, factorAt);
      return { windSpeed: wind.windSpeed, pitch: wind.pitch, kept };
    });
    return { gain, proof, tightest: proof.reduce((worst, next) => (next.kept.use > worst.kept.use ? next : worst)) };
  };
  let best = at(start);
  for (let lowering = 0; lowering < MOST_LOWERINGS && best.tightest.kept.use > 1; lowering++) {
    const next = at(best.gain * LOWERING);
    if (next.tightest.kept.use >= best.tightest.kept.use) break;
    best = next;
  }
  return best;
}

/** The machines of the spread at a wind speed, with what their sensors show at each frequency: all that no gain changes. */
interface SensedWind {
  windSpeed: number;
  nominal: SpreadPlant;
  frequencies: Float64Array;
  points: readonly Complex[];
  relatives: readonly { relative: SpreadPlant; sensed: readonly SensedPlant[] }[];
}

function sensedWind(task: MarginDesignTask, windSpeed: number, spread: readonly SpreadPlant[]): SensedWind[] {
  const nominal = spread.find((relative) => relative.nominal);
  if (!nominal) return [];
  refuseGrowth(task, nominal);
  const law = sampledLaw(
    task.controllerWith({ proportional: 1, integral: 0 }, FLAT),
    task.machine,
    nominal.plant.point,
  );
  const modes = distinct(spread.flatMap(({ plant }) => modesOf(plant.a)));
  const frequencies = frequencyGrid(0.02, Math.min(60, Math.PI / law.sampleTime), 120, modes);
  const points = Array.from(frequencies, (frequency) => exponential({ re: 0, im: frequency * law.sampleTime }));
  const relatives = spread.map((relative) => {
    const loop = new SampledLoop(relative.turbine, relative.plant, law);
    return { relative, sensed: points.map((z) => loop.sensedPlant(z)) };
  });
  return [{ windSpeed, nominal, frequencies, points, relatives }];
}

/** Unit loops: the law's pitch answer is proportional to its gains, so that two loops make all. */
function windTask(
  { spread: { slope }, ...task }: MarginDesignTask,
  wind: SensedWind,
  schedule: GainScheduleSettings,
): WindTask {
  const { windSpeed, nominal, frequencies, points, relatives } = wind;
  const answers = (gains: Gains, { plant }: SpreadPlant) => {
    const law = sampledLaw(task.controllerWith(gains, schedule), task.machine, plant.point);
    return points.map((z) => lawResponse(law, z));
  };
  const shared =
    schedule === FLAT
      ? (
          [
            [1, 0],
            [0, 1],
          ] as const
        ).map(([proportional, integral]) => answers({ proportional, integral }, nominal))
      : undefined;
  const loops = relatives.map(({ relative, sensed }): UnitLoop => {
    const [byProportional, byIntegral] =
      shared ??
      (
        [
          [1, 0],
          [0, 1],
        ] as const
      ).map(([proportional, integral]) => answers({ proportional, integral }, relative));
    return {
      machine: relative.machine,
      pitch: relative.plant.point.pitch,
      proportional: byProportional.map((answer, i) => loopGain(answer, sensed[i])),
      integral: byIntegral.map((answer, i) => loopGain(answer, sensed[i])),
    };
  });
  const slopes = slope > 0 ? [1 - slope, 1, 1 + slope] : [1];
  return { windSpeed, pitch: nominal.plant.point.pitch, frequencies, slopes, loops };
}

/** The frequency response cannot tell a stable loop from one that circles the edge the wrong way: the poles can. */
function requireStable(task: MarginDesignTask, wind: SensedWind, gains: Gains, schedule: GainScheduleSettings): void {
  for (const { relative } of wind.relatives) {
    const law = sampledLaw(task.controllerWith(gains, schedule), task.machine, relative.plant.point);
    const loop = new SampledLoop(relative.turbine, relative.plant, law);
    if (eigenvalues(loop.closedLoop()).every((z) => modulus(z) < 1)) continue;
    throw new NoGainError(`at ${wind.windSpeed.toFixed(1)} m/s the loop does not settle (machine ${relative.machine})`);
  }
}

/** One mode of each few per cent of frequency. */
function distinct(modes: readonly Mode[]): Mode[] {
  const kept: Mode[] = [];
  for (const mode of modes) {
    if (!kept.some(({ frequency }) => Math.abs(frequency / mode.frequency - 1) < 0.03)) kept.push(mode);
  }
  return kept;
}

/** With its pitch held and its torque law at work no swing of the machine may grow. A slow drift of speed may: it is what the loop is for. */
function refuseGrowth(task: MarginDesignTask, { turbine, plant }: SpreadPlant): void {
  const law = sampledLaw(task.controllerWith({ proportional: 0, integral: 0 }, FLAT), task.machine, plant.point);
  const loop = new SampledLoop(turbine, plant, law);
  const growing = sampledModesOf(loop.closedLoop(), law.sampleTime).find(({ pole }) => pole.re > 0 && pole.im > 0);
  if (!growing) return;
  const most = loop.states[growing.participation.indexOf(Math.max(...growing.participation))];
  throw new RangeError(growthText(plant.point.windSpeed, growing, most));
}

function growthText(windSpeed: number, { pole, frequency }: Mode, state: string): string {
  return (
    `at ${windSpeed.toFixed(1)} m/s the machine is unstable with its pitch held: "${state}" swings at ` +
    `${(frequency / (2 * Math.PI)).toFixed(2)} Hz and grows by a factor e in ${(1 / pole.re).toFixed(1)} s. Margins against less gain cannot be had; steady it first: ` +
    'with constant torque above rated, or more damping in the shaft'
  );
}

function withReserve(ask: MarginAsk): MarginAsk {
  return {
    sensitivityPeak: 1 + (ask.sensitivityPeak - 1) * (1 - RESERVE),
    gain: ask.gain * (1 + RESERVE),
    phase: ask.phase * (1 + RESERVE),
    delay: ask.delay * (1 + RESERVE),
  };
}

const WORDS: Readonly<Record<keyof MarginAsk, (value: number) => string>> = {
  sensitivityPeak: (value) => `a sensitivity peak of ${value.toFixed(2)}`,
  gain: (value) => `a gain margin of ${value.toFixed(2)}`,
  phase: (value) => `a phase margin of ${((value * 180) / Math.PI).toFixed(1)} deg`,
  delay: (value) => `a delay margin of ${value.toFixed(2)} s`,
};

/** The margin in words, e.g. "a gain margin of 2.10". */
export function marginText(name: keyof MarginAsk, value: number): string {
  return WORDS[name](value);
}

function noGainText({ windSpeed }: WindTask, { kept }: FastestGain, ask: MarginAsk): string {
  return (
    `at ${windSpeed.toFixed(1)} m/s no gain keeps ${marginText(kept.binding, ask[kept.binding])}: ` +
    `the best found there is ${marginText(kept.binding, kept[kept.binding])} (machine ${kept.machine})`
  );
}

function proofText({ windSpeed, kept }: ProofPoint, ask: MarginAsk): string {
  return (
    `between the points of the design, at ${windSpeed.toFixed(1)} m/s, no gain keeps ` +
    `${marginText(kept.binding, ask[kept.binding])}: what remains is ${marginText(kept.binding, kept[kept.binding])}`
  );
}
