import { clamp, type Machine, OPERATING_STATES, type Request, type Supervisor } from './contract.ts';
import { type StopSequence, stopSequenceMemory, stopSequenceRunner } from './stop-sequence.ts';

export interface SupervisorSettings {
  /** s */
  sampleTime: number;
  startUp: {
    /** Pitch at which the rotor is run up, rad, the rate to it, rad/s, and the rotor speed at which the generator takes over, rad/s. */
    pitch: number;
    pitchRate: number;
    connectSpeed: number;
    /** How fast the speed set-point then rises to rated, rad/s² of the rotor. */
    setpointRate: number;
  };
  /** Normal stop when the averaged nacelle wind passes `above` (m/s); averaging time in s. */
  highWind: { above: number; averaging: number };
  normalStop: StopSequence;
}

const FIXED = ['state', 'request', 'averaged wind', 'pitch demand', 'speed set-point', 'brake'] as const;
const [STATE, REQUEST, WIND, PITCH, SETPOINT, BRAKE] = FIXED.keys();
const STOP_AT = FIXED.length;

const [PARKED, START_UP, PRODUCTION, NORMAL_STOP] = [
  OPERATING_STATES.indexOf('parked'),
  OPERATING_STATES.indexOf('start-up'),
  OPERATING_STATES.indexOf('power production'),
  OPERATING_STATES.indexOf('normal stop'),
];
const REQUESTS: readonly Request[] = ['start', 'normal stop'];

/**
 * Start-up: release the brake, turn the blades to the run-up pitch, hand over to the control law at the connect speed
 * and let the speed set-point rise to rated. Normal stop: on request, or when the averaged wind is too high.
 */
export function supervisor(settings: SupervisorSettings, machine: Machine): Supervisor {
  const { startUp, highWind, normalStop, sampleTime } = settings;
  const { bladeCount, gearRatio, featherPitch, ratedGeneratorSpeed, ratedPower } = machine;
  const runner = stopSequenceRunner(bladeCount, sampleTime);
  const windMemory = highWind.averaging > 0 ? Math.exp(-sampleTime / highWind.averaging) : 0;
  const pitchStep = startUp.pitchRate * sampleTime;
  const setpointStep = startUp.setpointRate * gearRatio * sampleTime;
  const connectSpeed = startUp.connectSpeed * gearRatio;

  return {
    sampleTime,
    memory: [...FIXED, ...stopSequenceMemory(bladeCount)],
    start(state, point, brakeApplied, memory) {
      memory[STATE] = OPERATING_STATES.indexOf(state);
      memory[WIND] = point.windSpeed;
      memory[PITCH] = point.pitch;
      memory[SETPOINT] = ratedGeneratorSpeed;
      memory[BRAKE] = brakeApplied ? 1 : 0;
    },
    request(request, memory) {
      memory[REQUEST] = 1 + REQUESTS.indexOf(request);
    },
    step(t, measured, memory, orders) {
      memory[WIND] = windMemory * memory[WIND] + (1 - windMemory) * measured.windSpeed;
      const request = memory[REQUEST] > 0 ? REQUESTS[memory[REQUEST] - 1] : undefined;
      memory[REQUEST] = 0;

      if (measured.safetyChainActive) {
        memory[STATE] = PARKED;
        memory[PITCH] = measured.pitch[0];
      } else if (memory[STATE] === PARKED && request === 'start') {
        memory[STATE] = START_UP;
        memory[BRAKE] = 0;
      } else if (memory[STATE] === START_UP && measured.generatorSpeed >= connectSpeed) {
        memory[STATE] = PRODUCTION;
        memory[SETPOINT] = measured.generatorSpeed;
      } else if (memory[STATE] === NORMAL_STOP && runner.parked(memory, STOP_AT)) {
        memory[STATE] = PARKED;
        memory[PITCH] = measured.pitch[0];
      }
      const running = memory[STATE] === PRODUCTION || memory[STATE] === START_UP;
      if (running && (request === 'normal stop' || memory[WIND] > highWind.above)) {
        memory[STATE] = NORMAL_STOP;
        runner.begin(t, measured.pitch, memory, STOP_AT);
      }

      if (memory[STATE] === NORMAL_STOP) {
        runner.step(normalStop, t, measured, memory, STOP_AT, orders);
        memory[BRAKE] = orders.brake ? 1 : 0;
      } else if (memory[STATE] !== PRODUCTION) {
        const target = memory[STATE] === START_UP ? startUp.pitch : featherPitch;
        memory[PITCH] = clamp(target, memory[PITCH] - pitchStep, memory[PITCH] + pitchStep);
        orders.active = true;
        orders.pitch.fill(memory[PITCH]);
        orders.torqueFraction = 0;
        orders.brake = memory[BRAKE] === 1;
      } else {
        memory[SETPOINT] = Math.min(memory[SETPOINT] + setpointStep, ratedGeneratorSpeed);
      }
      orders.state = memory[STATE];
      measured.state = memory[STATE];
      measured.speedSetpoint = memory[SETPOINT];
      measured.powerSetpoint = ratedPower;
    },
  };
}
