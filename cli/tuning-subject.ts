/** What the tuning commands work on: a scenario's machine and controller. */
import { readFile } from 'node:fs/promises';
import type { Machine } from '../controllers/contract.ts';
import { torqueCurveOf } from '../scenarios/control.ts';
import { loadScenario, loadTurbine } from '../scenarios/disk.ts';
import { refusal } from '../scenarios/input-error.ts';
import { machineOf } from '../scenarios/machine.ts';
import type { ScenarioData } from '../scenarios/scenario.ts';
import { formatTag } from '../scenarios/schema/file-kind.ts';
import { cachedSurface } from '../scenarios/surface-cache.ts';
import { BladeElementRotor } from '../sim/aerodynamics/blade-element-rotor.ts';
import type { CoefficientSurface } from '../sim/aerodynamics/coefficient-surface.ts';
import { surfaceRotor } from '../sim/aerodynamics/surface-rotor.ts';
import type { Rotor } from '../sim/rotor.ts';
import { Trim, type TrimPoint } from '../sim/trim.ts';
import type { RotorModel, Turbine } from '../sim/turbine.ts';
import { axisymmetric } from '../tuning/linear-plant.ts';

export interface MachineSubject {
  turbine: Turbine;
  machine: Machine;
  surface: CoefficientSurface;
  rotor: Rotor;
  trim: Trim;
  /** Generator torque that the control law settles on; undefined for a turbine alone. */
  torqueCurve?: (generatorSpeed: number) => number;
  /** Absent for a turbine alone. */
  scenario?: ScenarioData;
}

/** The turbine of a turbine file, or of a scenario together with its controller. @throws InputError */
export async function machineSubject(
  file: string,
  set: readonly string[],
  rotor: RotorModel = 'surface',
): Promise<MachineSubject> {
  const text = await readFile(file, 'utf8').catch(() => '');
  if (!new RegExp(`^galehold:\\s*${formatTag('scenario')}`, 'm').test(text)) {
    return ofTurbine(file, await loadTurbine(file, { set }), rotor);
  }
  return scenarioSubject(file, set, rotor);
}

export type ScenarioSubject = MachineSubject & { scenario: ScenarioData };

/** @throws InputError where the file is no scenario */
export async function scenarioSubject(
  file: string,
  set: readonly string[],
  rotor: RotorModel = 'surface',
): Promise<ScenarioSubject> {
  const scenario = await loadScenario(file, { set });
  const subject = ofTurbine(file, scenario.turbine, rotor);
  return { ...subject, scenario, torqueCurve: torqueCurveOf(scenario.controller, subject.machine) };
}

/** With the blade-element rotor the machine is taken the same at every azimuth: no tilt, no cone, no tower shadow. */
function ofTurbine(file: string, turbine: Turbine, model: RotorModel): MachineSubject {
  const surface = cachedSurface(turbine);
  const machine = machineOf(turbine);
  if (model === 'surface') {
    const rotor = surfaceRotor(surface);
    return { turbine, machine, surface, rotor, trim: new Trim(turbine, rotor) };
  }
  if (turbine.rotor.aerodynamics.kind !== 'blade') {
    throw refusal(file, 'the blade-element rotor needs a blade, but the turbine gives coefficient tables');
  }
  const even = axisymmetric(turbine);
  const rotor = new BladeElementRotor(even);
  return { turbine: even, machine, surface, rotor, trim: new Trim(even, rotor) };
}

/** The rotor that `--rotor` names. @throws InputError for another word */
export function rotorModelOf(text: string): RotorModel {
  if (text === 'surface') return text;
  if (text === 'blade_element') return 'blade element';
  throw refusal('--rotor', `must be surface or blade_element, not "${text}"`);
}

/** Trim points at those of `winds` that have one, and why the others have none. @throws InputError where none has */
export function trimAll(
  file: string,
  { trim, torqueCurve, rotor }: MachineSubject,
  winds: readonly number[],
): { points: TrimPoint[]; refusals: string[] } {
  const points: TrimPoint[] = [];
  const refusals: string[] = [];
  for (const wind of winds) {
    try {
      const point = trim.at(wind, torqueCurve);
      const settled = rotor instanceof BladeElementRotor;
      points.push(
        settled ? { ...point, rotorStates: rotor.settledStates(wind, point.rotorSpeed, point.pitch) } : point,
      );
    } catch (cause) {
      refusals.push(cause instanceof Error ? cause.message : String(cause));
    }
  }
  if (points.length === 0) throw refusal(file, `no wind speed can be trimmed: ${refusals[0]}`);
  return { points, refusals };
}

/** Those of the points that run at rated power. @throws InputError where there are fewer than two */
export function ratedPoints(file: string, { turbine }: MachineSubject, points: readonly TrimPoint[]): TrimPoint[] {
  const rated = points.filter((point) => point.region === 'rated');
  if (rated.length >= 2) return rated;
  const most = Math.max(...points.map((point) => point.power));
  throw refusal(
    file,
    rated.length === 1
      ? 'only one of the wind speeds lies in the rated region, where the pitch loop works; two are due'
      : `no wind speed carries the turbine to its rated power of ${(turbine.ratings.power / 1e3).toFixed(0)} kW; ` +
          `the most is ${(most / 1e3).toFixed(0)} kW`,
  );
}
