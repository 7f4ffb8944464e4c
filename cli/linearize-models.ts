/** Linear models at the trim points as a listing of modes, CSV, or JSON. */
import type { Matrix } from 'ml-matrix';
import { controllerOf } from '../scenarios/control.ts';
import { refusal } from '../scenarios/input-error.ts';
import type { TrimPoint } from '../sim/trim.ts';
import type { Complex } from '../tuning/complex.ts';
import {
  type LinearPlant,
  linearPlant,
  PLANT_INPUT_UNITS,
  PLANT_INPUTS,
  PLANT_OUTPUT_UNITS,
  PLANT_OUTPUTS,
} from '../tuning/linear-plant.ts';
import { type Mode, modesOf, sampledModesOf } from '../tuning/modes.ts';
import { sampledLaw } from '../tuning/sampled-law.ts';
import { SampledLoop } from '../tuning/sampled-loop.ts';
import { transmissionZeros } from '../tuning/transmission-zeros.ts';
import type { LinearizeOptions } from './linearize.ts';
import { textTable } from './text-table.ts';
import { type MachineSubject, machineSubject, rotorModelOf, trimAll } from './tuning-subject.ts';
import { writeAsked } from './whole-file.ts';
import { windSpeeds } from './wind-range.ts';

interface Model {
  plant: LinearPlant;
  modes: Mode[];
  /** From pitch demand to generator speed. */
  zeros: Complex[];
  /** Of the closed loop, where there is a controller. */
  loop?: { states: readonly string[]; modes: Mode[]; lawBends: readonly string[] };
}

/** @throws InputError where file, range or places to write are unusable */
export async function linearModels(file: string, options: LinearizeOptions): Promise<void> {
  const subject = await machineSubject(file, options.set, rotorModelOf(options.rotor));
  const { points, refusals } = trimAll(file, subject, windSpeeds(subject.turbine, options));
  const models = points.map((point) => modelAt(file, subject, point));
  if (options.csv !== undefined) await writeAsked(options.csv, csv(models));
  if (options.json) {
    console.log(JSON.stringify(jsonOf(subject, models), null, 1));
    return;
  }
  console.log(`${subject.turbine.name}: linear models at ${models.length} wind speeds`);
  for (const model of models) console.log(`\n${modelText(model)}`);
  for (const refused of refusals) console.error(refused);
}

function modelAt(file: string, subject: MachineSubject, point: TrimPoint): Model {
  const { turbine, rotor, machine, scenario } = subject;
  try {
    const law = scenario && sampledLaw(controllerOf(scenario.controller, machine), machine, point);
    const plant = linearPlant(turbine, rotor, point, law?.pitchAs);
    const n = plant.a.rows;
    const zeros = transmissionZeros(plant.a, plant.b.subMatrix(0, n - 1, 0, 0), plant.c.subMatrix(0, 0, 0, n - 1), 0);
    const model: Model = { plant, modes: modesOf(plant.a), zeros };
    if (!law) return model;
    const loop = new SampledLoop(turbine, plant, law);
    const modes = sampledModesOf(loop.closedLoop(), law.sampleTime);
    return { ...model, loop: { states: loop.states, modes, lawBends: law.bends } };
  } catch (cause) {
    throw refusal(file, cause instanceof Error ? cause.message : String(cause));
  }
}

function jsonOf({ turbine, scenario }: MachineSubject, models: readonly Model[]) {
  const units = (names: readonly string[], of: readonly string[]) => names.map((name, i) => ({ name, unit: of[i] }));
  return {
    turbine: turbine.name,
    controller: scenario?.controller.name ?? null,
    inputs: units(PLANT_INPUTS, PLANT_INPUT_UNITS),
    outputs: units(PLANT_OUTPUTS, PLANT_OUTPUT_UNITS),
    models: models.map(({ plant, modes, zeros, loop }) => ({
      trim: plant.point,
      states: plant.states,
      a: plant.a.to2DArray(),
      b: plant.b.to2DArray(),
      c: plant.c.to2DArray(),
      d: plant.d.to2DArray(),
      bends: plant.bends,
      modes,
      zerosFromPitchToGeneratorSpeed: zeros,
      closedLoop: loop ?? null,
    })),
  };
}

function csv(models: readonly Model[]): string {
  const rows = models.flatMap(({ plant }) => {
    const entries = (name: string, matrix: Matrix, to: readonly string[], from: readonly string[]) =>
      to.flatMap((target, i) =>
        from.map((source, j) =>
          [plant.point.windSpeed, name, quoted(target), quoted(source), matrix.get(i, j)].join(','),
        ),
      );
    return [
      ...entries('A', plant.a, plant.states, plant.states),
      ...entries('B', plant.b, plant.states, PLANT_INPUTS),
      ...entries('C', plant.c, PLANT_OUTPUTS, plant.states),
      ...entries('D', plant.d, PLANT_OUTPUTS, PLANT_INPUTS),
    ];
  });
  return `${['wind_m_s,matrix,of,by,value', ...rows].join('\n')}\n`;
}

function quoted(text: string): string {
  return /[",]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}

function modelText({ plant, modes, zeros, loop }: Model): string {
  const { windSpeed, region } = plant.point;
  const lines = [
    `Wind ${windSpeed.toFixed(2)} m/s (${region} region)`,
    'Plant:',
    modeTable(modes, plant.states),
    `Zeros from pitch demand to generator speed, 1/s: ${zerosText(zeros)}`,
  ];
  if (plant.bends.length > 0)
    lines.push(`Slopes differ to both sides (the positive side counts): ${plant.bends.join('; ')}`);
  if (!loop) return lines.join('\n');
  lines.push('Closed loop:', modeTable(loop.modes, loop.states));
  if (loop.lawBends.length > 0)
    lines.push(`The law bends here (the positive side counts): ${loop.lawBends.join('; ')}`);
  return lines.join('\n');
}

/** Faster modes than this are the law's filters and sensors. */
const FASTEST_SHOWN = 60;
/** The sections' own air: many modes that all say the same. */
const SECTION_STATE = /section \d+:/;
const MOST_ZEROS = 12;

/** All of them; of many, those that swing or are on the wrong side. */
function zerosText(zeros: readonly Complex[]): string {
  const once = zeros.filter(({ im }) => im >= 0);
  if (once.length <= MOST_ZEROS) return once.map(complexText).join('; ') || 'none';
  const told = once.filter(({ re, im }) => re > 0 || im > 0.1);
  return `${told.map(complexText).join('; ')}; ${once.length - told.length} others in the left half plane`;
}

function modeTable(modes: readonly Mode[], states: readonly string[]): string {
  const slow = modes.filter(({ frequency }) => frequency < FASTEST_SHOWN);
  const leading = ({ participation }: Mode) => states[participation.indexOf(Math.max(...participation))];
  const shown = slow.filter((mode) => !SECTION_STATE.test(leading(mode)));
  const left = slow.length - shown.length;
  const table = textTable(
    ['', 'pole_1_s', 'frequency_hz', 'damping', 'states_that_take_part'],
    shown.map((mode) => [
      '',
      complexText(mode.pole),
      (mode.frequency / (2 * Math.PI)).toFixed(4),
      mode.damping.toFixed(4),
      participants(mode, states),
    ]),
  );
  return left === 0 ? table : `${table}\nand ${left} modes of the air at single sections, all listed by --json`;
}

function participants({ participation }: Mode, states: readonly string[]): string {
  return participation
    .map((share, i) => ({ share, name: states[i] }))
    .sort((a, b) => b.share - a.share)
    .slice(0, 2)
    .map(({ share, name }) => `${name} ${(100 * share).toFixed(0)} %`)
    .join(', ');
}

function complexText({ re, im }: Complex): string {
  return Math.abs(im) < 1e-9 ? re.toFixed(4) : `${re.toFixed(4)} ±${Math.abs(im).toFixed(4)}j`;
}
