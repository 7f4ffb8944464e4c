/** `galehold tune formula`: gains in closed form at one trim point, and a schedule by the slope of power with pitch. */
import { gainSchedule } from '../controllers/gain-schedule.ts';
import { controllerOf, torqueCurveOf } from '../scenarios/control.ts';
import { refusal } from '../scenarios/input-error.ts';
import { gainsByFormula } from '../tuning/gains-by-formula.ts';
import { rotorSlopes } from '../tuning/rotor-slopes.ts';
import { type GainPoint, type ScheduleFit, scheduleFits, smallestFit } from '../tuning/schedule-fit.ts';
import { lagOf, speedLoop } from '../tuning/speed-loop.ts';
import { controllerPathOf, requireGains, withTunedLaw } from './controller-file.ts';
import { pitchLawOf, withGains } from './loop-view.ts';
import { scheduleText } from './schedule-text.ts';
import type { FormulaOptions } from './tune.ts';
import { loopSections, reportPage } from './tune-report.ts';
import { ratedPoints, type ScenarioSubject, scenarioSubject, trimAll } from './tuning-subject.ts';
import { writeAsked } from './whole-file.ts';
import { evenWinds, optionNumber, optionValue } from './wind-range.ts';

const DEGREE = Math.PI / 180;
const WINDS = 50;
/** A larger schedule is not worth its numbers where a smaller one is this close. */
const CLOSE = 0.05;
const PEAK_SHOWN = 2;
/** Gain over that at the reference, up to which a trim point counts for the schedule. */
const LARGEST_RISE = 3;
const LARGEST_EXTRAPOLATION = 1.5;

/** @throws InputError */
export async function tuneByFormula(file: string, options: FormulaOptions): Promise<void> {
  const frequency = optionNumber('--frequency', options.frequency, 0, 20);
  const damping = optionNumber('--damping', options.damping, 0, 5);
  const subject = await scenarioSubject(file, options.set);
  const { turbine, surface, trim, scenario, machine } = subject;
  const source = await controllerPathOf(file);
  await requireGains(source);
  const rated = ratedPoints(file, subject, trimAll(file, subject, evenWinds(turbine, WINDS)).points);
  const wind = options.at === undefined ? undefined : optionValue('--at', options.at, 'speed');
  const reference =
    wind === undefined
      ? rated[Math.floor(rated.length / 2)]
      : trim.at(wind, torqueCurveOf(scenario.controller, machine));
  if (reference.region !== 'rated') throw refusal('--at', 'the pitch loop does not work below rated power');

  const points = rated.map((point) => {
    const slopes = rotorSlopes(surface, point);
    return { pitch: point.pitch, gain: -1 / (slopes.torquePerPitch * point.rotorSpeed) };
  });
  if (points.some(({ gain }) => !(gain > 0))) {
    throw refusal(
      file,
      'in the rated region the rotor’s power rises as the blades turn towards feather: it is stalled there',
    );
  }
  const filter = pitchLawOf(scenario.controller)?.speedFilter?.frequency;
  const terms = {
    aerodynamicDamping: options.aerodynamicDamping,
    constantPower: options.constantPower && keepsPower(subject),
    lag: options.lag ? lagOf(turbine, controllerOf(scenario.controller, machine).sampleTime, filter) : 0,
  };
  const fit = formulaSchedule(points, reference.pitch);
  const factor = gainSchedule(fit.schedule)(reference.pitch);
  let gains: ReturnType<typeof gainsByFormula>;
  try {
    gains = gainsByFormula(speedLoop(turbine, reference, rotorSlopes(surface, reference), terms), frequency, damping);
  } catch (cause) {
    throw refusal(file, cause instanceof Error ? cause.message : String(cause));
  }
  const atZero = { proportional: gains.proportional / factor, integral: gains.integral / factor };

  const included = [
    ...(terms.aerodynamicDamping ? ['aerodynamic damping'] : []),
    ...(terms.constantPower ? ['constant power'] : []),
    ...(terms.lag > 0 ? [`a lag of ${terms.lag.toFixed(3)} s`] : []),
  ];
  const what = `${frequency} rad/s and damping ${damping} at ${reference.windSpeed.toFixed(1)} m/s (pitch ${(reference.pitch / DEGREE).toFixed(2)} deg)`;
  const withTerms = included.length > 0 ? `, with ${included.join(', ')}` : '';
  const text = await withTunedLaw(source, options.out, options.set, {
    ...atZero,
    schedule: fit.schedule,
    comments: {
      proportional: `formula for ${what}: ${gains.proportional.toPrecision(4)} s there, over the schedule's factor ${factor.toPrecision(4)}`,
      integral: `likewise: ${gains.integral.toPrecision(4)} there`,
      schedule: `follows the slope of power with pitch within ${(100 * fit.largestError).toFixed(1)} % from rated to cut-out wind`,
    },
    head: [
      `Gains by formula for ${what}${withTerms}.`,
      'Hansen et al., Riso-R-1500, 2005; Jonkman et al., NREL/TP-500-38060, 2009; terms as in galehold tune formula.',
    ],
  });
  await writeAsked(options.out, text);
  console.log(`${turbine.name}: gains by formula for ${what}${withTerms}`);
  console.log(
    `  proportional ${atZero.proportional.toPrecision(4)} s, integral ${atZero.integral.toPrecision(4)}, ${scheduleText(fit.schedule)}`,
  );
  console.log(`Written to ${options.out}.`);
  if (options.report === undefined) return;
  const tuned = withGains(scenario.controller, atZero, fit.schedule);
  const sections = loopSections(subject, tuned, rated, PEAK_SHOWN);
  const asked = {
    heading: 'What was asked, what was found',
    text: [
      `Frequency and damping of the speed loop: ${what}${withTerms}.`,
      `Proportional ${atZero.proportional.toPrecision(4)} s, integral ${atZero.integral.toPrecision(4)}, times ${scheduleText(fit.schedule)}; the schedule follows the slope of power with pitch within ${(100 * fit.largestError).toFixed(1)} %.`,
    ],
  };
  await writeAsked(options.report, reportPage(`${turbine.name}: pitch gains by formula`, [asked, ...sections]));
  console.log(`Report: ${options.report}`);
}

/**
 * The schedule that follows the slope. Around rated wind the slope fades, for there the rotor is at its best, and the
 * gain that would make up for it grows without bound: such points are left out, and so is a schedule that would
 * carry the growth on to zero pitch.
 */
function formulaSchedule(points: readonly GainPoint[], reference: number): ScheduleFit {
  const nearest = points.reduce((a, b) => (Math.abs(b.pitch - reference) < Math.abs(a.pitch - reference) ? b : a));
  const steady = points.filter(({ gain }) => gain <= LARGEST_RISE * nearest.gain);
  const fits = scheduleFits(steady, 'nearest').filter(({ schedule }) => {
    const factor = gainSchedule(schedule);
    return factor(0) <= LARGEST_EXTRAPOLATION * Math.max(...steady.map(({ pitch }) => factor(pitch)));
  });
  return smallestFit(fits, CLOSE, 'largestError');
}

/** Whether the controller's torque falls with speed above rated. */
function keepsPower({ scenario: { controller } }: ScenarioSubject): boolean {
  return (
    controller.kind === 'laws' &&
    controller.laws.some((law) => law.law === 'torque curve' && law.aboveRated === 'constant power')
  );
}
