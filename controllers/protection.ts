import { OPERATING_STATES, type OperatingState, type Protection, type ProtectionSignals } from './contract.ts';
import { guard } from './guards/index.ts';
import { type StopSequence, stopSequenceMemory, stopSequenceRunner } from './stop-sequence.ts';

/** What a guard watches; speeds in rad/s, angles in rad. */
export type GuardWatch =
  | { watch: 'rotor overspeed'; above: number }
  | { watch: 'generator overspeed'; above: number }
  /** Largest difference between a blade's demanded and true angle. */
  | { watch: 'pitch deviation'; above: number }
  | { watch: 'grid loss' }
  | { watch: 'manual button' };

export type GuardSettings = GuardWatch & {
  name: string;
  /** How long the condition must last, s. */
  hold: number;
  /** `manual`: latched to the end of the run. `automatic`: released when the machine is parked and the condition has gone. */
  reset: 'manual' | 'automatic';
  /** Name of the stop sequence it starts. */
  stop: string;
};

export interface ProtectionSettings {
  /** s */
  sampleTime: number;
  /** In order of precedence: a later guard may replace an earlier guard's stop only if it stands before it in this list. */
  guards: readonly GuardSettings[];
  stops: Readonly<Record<string, StopSequence>>;
}

/** Fixed slots; then per guard since when it speaks (NaN: silent), whether and by what reading it is latched; then the stop's own. */
const FIXED = ['first guard', 'active stop', 'guard of the active stop'] as const;
const [FIRST, STOP, STOP_GUARD] = FIXED.keys();

const PARKED = OPERATING_STATES.indexOf('parked');

/** The state that a stop sequence shows, by its name: `normal` and `manual` their own, any other an emergency stop. */
function stateOfStop(name: string): number {
  const state: OperatingState =
    name === 'normal' ? 'normal stop' : name === 'manual' ? 'manual stop' : 'emergency stop';
  return OPERATING_STATES.indexOf(state);
}

/**
 * The safety chain: watches its own signals, latches, and carries out the stop that its gravest latched guard asks
 * for. Guards stand in the file with the gravest first: while a stop is under way, only a guard that stands before
 * the one that began it can put another sequence in its place.
 */
export function safetyChain(settings: ProtectionSettings, bladeCount: number): Protection {
  const guards = settings.guards.map((g) => ({ ...g, ...guard(g) }));
  const stops = Object.keys(settings.stops);
  const sequences = stops.map((name) => settings.stops[name]);
  const states = stops.map(stateOfStop);
  const stopOf = guards.map((g) => stops.indexOf(g.stop));
  const runner = stopSequenceRunner(bladeCount, settings.sampleTime);
  const speaksAt = FIXED.length;
  const latchedAt = speaksAt + guards.length;
  const readingAt = latchedAt + guards.length;
  const runAt = readingAt + guards.length;

  /** Whether guard `i` latches at this sample. */
  function latches(i: number, t: number, signals: Readonly<ProtectionSignals>, memory: Float64Array): boolean {
    if (memory[latchedAt + i] === 1) return false;
    if (!guards[i].speaks(signals)) {
      memory[speaksAt + i] = Number.NaN;
      return false;
    }
    if (Number.isNaN(memory[speaksAt + i])) memory[speaksAt + i] = t;
    // Half a sample of slack: sample times are not exact in binary.
    if (t - memory[speaksAt + i] < guards[i].hold - 0.5 * settings.sampleTime) return false;
    memory[latchedAt + i] = 1;
    memory[readingAt + i] = guards[i].reading(signals);
    return true;
  }

  function takeNote(i: number, t: number, signals: Readonly<ProtectionSignals>, memory: Float64Array): void {
    if (memory[FIRST] < 0) memory[FIRST] = i;
    const running = memory[STOP];
    if (running === stopOf[i] || (running >= 0 && memory[STOP_GUARD] < i)) return;
    memory[STOP] = stopOf[i];
    memory[STOP_GUARD] = i;
    runner.begin(t, signals.pitch, memory, runAt);
  }

  /** Once parked, guards that reset by themselves let go when their condition has gone. */
  function resetIfAllowed(signals: Readonly<ProtectionSignals>, memory: Float64Array): void {
    for (let i = 0; i < guards.length; i++) {
      if (memory[latchedAt + i] !== 1) continue;
      if (guards[i].reset === 'manual' || guards[i].speaks(signals)) return;
    }
    memory.fill(0, latchedAt, latchedAt + guards.length);
    memory[FIRST] = memory[STOP] = memory[STOP_GUARD] = -1;
  }

  return {
    sampleTime: settings.sampleTime,
    memory: [
      ...FIXED,
      ...guards.map((g) => `${g.name} speaks since`),
      ...guards.map((g) => `${g.name} latched`),
      ...guards.map((g) => `${g.name} latched at`),
      ...stopSequenceMemory(bladeCount),
    ],
    guards: guards.map((g) => g.name),
    stops,
    start(memory) {
      memory[FIRST] = memory[STOP] = memory[STOP_GUARD] = -1;
      memory.fill(Number.NaN, speaksAt, latchedAt);
    },
    step(t, signals, memory, orders) {
      for (let i = 0; i < guards.length; i++) {
        if (latches(i, t, signals, memory)) takeNote(i, t, signals, memory);
      }
      if (memory[STOP] < 0) return;
      runner.step(sequences[memory[STOP]], t, signals, memory, runAt, orders);
      const parked = runner.parked(memory, runAt);
      orders.state = parked ? PARKED : states[memory[STOP]];
      if (parked) resetIfAllowed(signals, memory);
    },
    firstGuard: (memory) => memory[FIRST],
    isLatched: (i, memory) => memory[latchedAt + i] === 1,
    latchedBy: (i, memory) => guards[i].describe(memory[readingAt + i]),
    activeStop: (memory) => memory[STOP],
  };
}
