/**
 * A law is one loop of a controller. A controller file stacks laws; each sees what the laws before it demand.
 *
 * To write a law: one file with its settings type and a function that returns a `Law`; add its name to `LawSettings`
 * in `scenarios/scenario.ts`, its keys to `scenarios/schema/controller.ts`, and a case to `stackLaws`'s caller.
 */
import type { Controller, Demands, Measured, Measurement, OperatingPoint } from './contract.ts';

export interface Law {
  readonly name: string;
  readonly memory: readonly string[];
  readonly needs: readonly Measurement[];
  /** The law's own numbers begin at `memory[at]`. */
  start(point: OperatingPoint, memory: Float64Array, at: number): void;
  step(measured: Readonly<Measured>, memory: Float64Array, at: number, demands: Demands): void;
}

/** One controller from laws that are stepped in order at the same sample time (s). */
export function stackLaws(name: string, sampleTime: number, laws: readonly Law[]): Controller {
  const starts = laws.map((_, i) => laws.slice(0, i).reduce((sum, law) => sum + law.memory.length, 0));
  return {
    name,
    sampleTime,
    memory: laws.flatMap((law) => law.memory.map((slot) => `${law.name}: ${slot}`)),
    needs: [...new Set(laws.flatMap((law) => law.needs))],
    start(point, memory) {
      for (let i = 0; i < laws.length; i++) laws[i].start(point, memory, starts[i]);
    },
    step(_t, measured, memory, demands) {
      demands.brake = false;
      for (let i = 0; i < laws.length; i++) laws[i].step(measured, memory, starts[i], demands);
    },
  };
}
