import { OPERATING_STATES } from '../controllers/contract.ts';
import { channelIndex } from '../sim/channels.ts';
import { Clock, type RunSetup } from '../sim/clock.ts';
import type { Turbine } from '../sim/turbine.ts';
import { type Complex, exponential, logarithm, quotient, scaled } from './complex.ts';

/** The sum of sines that is added to the pitch demand, and for how long. */
export interface Excitation {
  /** Largest sum of the sines, rad. */
  amplitude: number;
  /** Time after which all of them repeat, s, and how many such times are measured. */
  period: number;
  periods: number;
  /** Time before that, in which transients die down, s. */
  settling: number;
  /** Lowest and highest frequency, rad/s; every whole number of swings a period in between has its sine. */
  lowest: number;
  highest: number;
}

export const EXCITATION: Excitation = {
  amplitude: 0.05 * (Math.PI / 180),
  period: 240,
  periods: 1,
  settling: 120,
  lowest: 0.05,
  highest: 25,
};

/** The loop's gain as it was measured. */
export interface MeasuredLoop {
  /** rad/s, rising */
  frequencies: readonly number[];
  gain: readonly Complex[];
}

/**
 * Measures a loop's gain in a simulation: a multisine of Schroeder's phases (IEEE Trans. Information Theory 16, 1970) is
 * added to the pitch demand between law and drives, and L = −(what comes back)/(what was sent) at each of its lines.
 *
 * Serves any controller. It sees the nonlinear machine at the amplitude given: rate limits that bind change the result.
 * @param setup a run at steady wind from its trim point; duration and events are replaced
 * @throws Error where the machine leaves power production
 */
export function measureLoop(setup: RunSetup, excitation: Excitation = EXCITATION): MeasuredLoop {
  const sample = setup.controller.sampleTime;
  const samples = Math.round(excitation.period / sample);
  const bins = linesOf(excitation, samples);
  const signal = multisine(bins, samples, excitation.amplitude);
  const settling = Math.ceil(excitation.settling / sample);
  const last = settling + excitation.periods * samples;
  const indexAt = (t: number) => Math.floor(t / sample + 1e-6);

  const clock = new Clock({
    ...setup,
    events: [],
    duration: last * sample,
    pitchInjection: (t) => signal[indexAt(t) % samples],
  });
  const demand = channelIndex('pitch_demand_1_deg');
  const state = channelIndex('state');
  const production = OPERATING_STATES.indexOf('power production');
  const sent = new LineSums(bins, samples);
  const back = new LineSums(bins, samples);
  let next = 0;
  clock.frames.subscribe(({ time, values }) => {
    const k = indexAt(time);
    if (k < next) return;
    next = k + 1;
    if (values[state] !== production) throw new Error(`the machine left power production after ${time.toFixed(1)} s`);
    if (k < settling || k >= last) return;
    sent.add(k, values[demand]);
    back.add(k, values[demand] - signal[k % samples]);
  });
  clock.run();
  return {
    frequencies: bins.map((bin) => (2 * Math.PI * bin) / (samples * sample)),
    gain: bins.map((_, i) => scaled(quotient(back.at(i), sent.at(i)), -1)),
  };
}

/** The gain between the measured lines: logarithm of size, and angle, linear in the logarithm of frequency. */
export function interpolatedGain({ frequencies, gain }: MeasuredLoop): (frequency: number) => Complex {
  const logs = gain.map(logarithm);
  for (let i = 1; i < logs.length; i++) {
    logs[i].im -= 2 * Math.PI * Math.round((logs[i].im - logs[i - 1].im) / (2 * Math.PI));
  }
  return (frequency) => {
    const above = frequencies.findIndex((line) => line >= frequency);
    const i = above < 0 ? frequencies.length - 1 : Math.max(1, above);
    const share = Math.log(frequency / frequencies[i - 1]) / Math.log(frequencies[i] / frequencies[i - 1]);
    return exponential({
      re: logs[i - 1].re + share * (logs[i].re - logs[i - 1].re),
      im: logs[i - 1].im + share * (logs[i].im - logs[i - 1].im),
    });
  };
}

/** The machine with speed sensors that neither round nor add noise. */
export function withQuietSensors(turbine: Turbine): Turbine {
  const { controlSpeed, protectionSpeed } = turbine.sensors;
  return {
    ...turbine,
    sensors: {
      ...turbine.sensors,
      controlSpeed: { ...controlSpeed, resolution: 0, noise: 0 },
      protectionSpeed: { ...protectionSpeed, resolution: 0, noise: 0 },
    },
  };
}

/** Whole numbers of swings a period: a resonance between two of them would go unseen, so none is left out. */
function linesOf({ lowest, highest, period }: Excitation, samples: number): number[] {
  const toBin = period / (2 * Math.PI);
  const first = Math.max(1, Math.ceil(lowest * toBin));
  const last = Math.floor(Math.min(highest * toBin, 0.45 * samples));
  return Array.from({ length: last - first + 1 }, (_, i) => first + i);
}

/** One period, its sines of equal size. */
function multisine(bins: readonly number[], samples: number, amplitude: number): Float64Array {
  const signal = Float64Array.from({ length: samples }, (_, k) =>
    bins.reduce(
      (sum, bin, i) =>
        sum + Math.cos((2 * Math.PI * ((bin * k) % samples)) / samples - (Math.PI * i * i) / bins.length),
      0,
    ),
  );
  const largest = signal.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  return signal.map((value) => (amplitude * value) / largest);
}

/** Fourier sums at chosen lines. */
class LineSums {
  private readonly re: Float64Array;
  private readonly im: Float64Array;
  private readonly cosine: Float64Array;
  private readonly sine: Float64Array;

  constructor(
    private readonly bins: readonly number[],
    private readonly samples: number,
  ) {
    this.re = new Float64Array(bins.length);
    this.im = new Float64Array(bins.length);
    this.cosine = Float64Array.from({ length: samples }, (_, k) => Math.cos((2 * Math.PI * k) / samples));
    this.sine = Float64Array.from({ length: samples }, (_, k) => Math.sin((2 * Math.PI * k) / samples));
  }

  add(k: number, value: number): void {
    const { bins, samples, cosine, sine } = this;
    for (let i = 0; i < bins.length; i++) {
      const turn = (bins[i] * k) % samples;
      this.re[i] += value * cosine[turn];
      this.im[i] -= value * sine[turn];
    }
  }

  at(i: number): Complex {
    return { re: this.re[i], im: this.im[i] };
  }
}
