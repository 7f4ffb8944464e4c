/** `galehold tune margin`: the fastest loop that keeps the asked margins over a spread of machines. */

import { gainSchedule } from '../controllers/gain-schedule.ts';
import { refusal } from '../scenarios/input-error.ts';
import { integralGain, type MarginAsk } from '../tuning/gains-by-margin.ts';
import type { Spread } from '../tuning/machine-spread.ts';
import { designByMargin, type MarginDesign, marginText } from '../tuning/margin-design.ts';
import { controllerPathOf, requireGains, withTunedLaw } from './controller-file.ts';
import { controllerWith, withGains } from './loop-view.ts';
import { scheduleText } from './schedule-text.ts';
import type { MarginOptions } from './tune.ts';
import { loopSections, reportPage, type Section } from './tune-report.ts';
import { ratedPoints, scenarioSubject, trimAll } from './tuning-subject.ts';
import { writeAsked } from './whole-file.ts';
import { evenWinds, optionNumber, optionValue } from './wind-range.ts';

const DEGREE = Math.PI / 180;
const QUASI_STEADY =
  'The design takes a rotor without memory; wake and bending blades take some of the margins back: see ' +
  '"galehold margins" with "--rotor blade_element".';
const DESIGN_WINDS = 24;
const PROOF_WINDS = 50;

/** @throws InputError */
export async function tuneByMargin(file: string, options: MarginOptions): Promise<void> {
  const ask: MarginAsk = {
    sensitivityPeak: optionNumber('--sensitivity-peak', options.sensitivityPeak, 1, 20),
    gain: optionNumber('--gain-margin', options.gainMargin, 1, 100),
    phase: optionValue('--phase-margin', options.phaseMargin, 'angle'),
    delay: optionValue('--delay-margin', options.delayMargin, 'time'),
  };
  const percent = (option: string, text: string) => optionNumber(option, text, -1e-9, 60) / 100;
  const spread: Spread = {
    density: percent('--density', options.density),
    inertia: percent('--inertia', options.inertia),
    slope: percent('--slope', options.slope),
  };
  const subject = await scenarioSubject(file, options.set);
  const { turbine, machine, surface, scenario } = subject;
  const source = await controllerPathOf(file);
  await requireGains(source);
  const rated = ratedPoints(file, subject, trimAll(file, subject, evenWinds(turbine, PROOF_WINDS)).points);
  const [first, last] = [rated[0].windSpeed, rated[rated.length - 1].windSpeed];
  const winds = Array.from({ length: DESIGN_WINDS }, (_, i) => first + ((last - first) * i) / (DESIGN_WINDS - 1));

  let design: MarginDesign;
  try {
    design = designByMargin({
      turbine,
      machine,
      surface,
      controllerWith: controllerWith(subject),
      ask,
      spread,
      winds,
      proofWinds: evenWinds(turbine, PROOF_WINDS),
    });
  } catch (cause) {
    if (cause instanceof RangeError || (cause instanceof Error && cause.name === 'NoGainError')) {
      throw refusal(file, cause.message);
    }
    throw cause;
  }
  const { gains, schedule, tightest, integralTime, fit } = design;
  const asked = (Object.keys(ask) as (keyof MarginAsk)[]).map((name) => marginText(name, ask[name])).join(', ');
  const over = `air density ±${100 * spread.density} %, inertia ±${100 * spread.inertia} %, slope on pitch ±${100 * spread.slope} %`;
  const tightText =
    `tightest at ${tightest.windSpeed.toFixed(1)} m/s (machine ${tightest.kept.machine}): ` +
    marginText(tightest.kept.binding, tightest.kept[tightest.kept.binding]);
  const text = await withTunedLaw(source, options.out, options.set, {
    ...gains,
    schedule,
    comments: {
      proportional: `the fastest that keeps the margins; ${tightText}`,
      integral: `the proportional gain over ${integralTime.toFixed(3)} s, the integral time that serves all wind speeds best`,
      schedule: `the smallest that keeps the margins: on average ${(100 * fit.meanError).toFixed(1)} % below what each wind speed allows`,
    },
    head: [
      `Gains by margin: ${asked}, over ${over};`,
      `proven at ${design.proof.length} of ${PROOF_WINDS} wind speeds from cut-in to cut-out, those at rated power; ${tightText}.`,
    ],
  });
  await writeAsked(options.out, text);
  console.log(`${turbine.name}: the fastest pitch loop with ${asked}\nover ${over}`);
  console.log(
    `  proportional ${gains.proportional.toPrecision(4)} s, integral ${gains.integral.toPrecision(4)}, ${scheduleText(schedule)}`,
  );
  console.log(`  ${tightText}`);
  console.log(`Written to ${options.out}.\n${QUASI_STEADY}`);
  if (options.report === undefined) return;
  const sections = [
    summary(design, asked, over, tightText),
    ...loopSections(subject, withGains(scenario.controller, gains, schedule), rated, ask.sensitivityPeak),
  ];
  await writeAsked(options.report, reportPage(`${turbine.name}: pitch gains by margin`, sections));
  console.log(`Report: ${options.report}`);
}

function summary(design: MarginDesign, asked: string, over: string, tightText: string): Section {
  const { gains, schedule, integralTime, fit, fits, winds, proof } = design;
  return {
    heading: 'What was asked, what was found',
    text: [
      `Asked: ${asked}, over ${over}.`,
      `Found: proportional ${gains.proportional.toPrecision(4)} s, integral ${gains.integral.toPrecision(4)} (integral time ${integralTime.toFixed(2)} s), times ${scheduleText(schedule)}. The loop is ${tightText}.`,
      `The schedule is the smallest within reach: on average ${(100 * fit.meanError).toFixed(1)} % below the largest gain of each wind speed. Others: ${fits.map((each) => `${scheduleText(each.schedule)} ${(100 * each.meanError).toFixed(1)} %`).join('; ')}.`,
      QUASI_STEADY,
      'What a slower or faster loop would cost: the second chart shows how much of the tightest margin is used at each wind speed; 100 % is the margin as asked.',
    ],
    charts: [
      {
        title: 'Proportional gain: what each wind speed allows',
        x: { label: 'pitch, deg' },
        y: { label: 's' },
        lines: [
          {
            label: 'largest at common time',
            x: winds.map((w) => w.pitch / DEGREE),
            y: winds.map((w) => w.common.proportional),
            points: true,
          },
          {
            label: 'schedule',
            x: proof.map((p) => p.pitch / DEGREE),
            y: proof.map((p) => gains.proportional * gainSchedule(schedule)(p.pitch)),
          },
        ],
      },
      {
        title: 'Use of the tightest margin, worst machine',
        x: { label: 'wind speed, m/s' },
        y: { label: '%' },
        lines: [{ label: 'proof', x: proof.map((p) => p.windSpeed), y: proof.map((p) => 100 * p.kept.use) }],
      },
      {
        title: 'Integral gain: alone and with a common integral time',
        x: { label: 'wind speed, m/s' },
        y: { label: '1', logarithmic: true },
        lines: [
          {
            label: 'fastest alone',
            x: winds.map((w) => w.windSpeed),
            y: winds.map((w) => integralGain(w.alone)),
            dashed: true,
          },
          { label: 'common time', x: winds.map((w) => w.windSpeed), y: winds.map((w) => integralGain(w.common)) },
        ],
      },
    ],
  };
}
