import { OPERATING_STATES, type OperatingState } from '../../controllers/contract.ts';
import type { Frame, RunEvent } from '../../sim/frame.ts';
import type { ScenarioData } from '../scenario.ts';
import { Integral, Maximum } from '../statistics.ts';
import type { Metric } from '../summary.ts';
import { bladeIndices, fillMetrics, frameIndex, inChannelUnit, type MetricGroup } from './group.ts';

export const STOP_METRICS = {
  trips: ['Trips of the safety chain', '1'],
  first_guard_number: ['First guard that fired, by its place in the protection file', '1'],
  first_guard_time_s: ['First guard fired at', 's'],
  stop_to_feather_s: ['From trip or normal stop until all blades are within 2 deg of feather', 's'],
  stop_to_feather_moving_s: ['From trip or normal stop until the blades not made to stick are that near feather', 's'],
  stop_to_standstill_s: ['From trip or normal stop until the brake holds the rotor at standstill', 's'],
  rotor_speed_peak_after_stop_rpm: ['Highest rotor speed after trip or normal stop', 'rpm'],
  brake_energy_kj: ['Energy taken by the brake', 'kJ'],
  brake_temperature_peak_c: ['Highest brake disc temperature', '°C'],
} as const;

const SPEED = frameIndex('rotor_speed_rpm');
const GENERATOR_SPEED = frameIndex('generator_speed_rpm');
const ACTIVE_GUARD = frameIndex('active_guard');
const STATE = frameIndex('state');
const BRAKE_TORQUE = frameIndex('brake_torque_kn_m');
const BRAKE_TEMPERATURE = frameIndex('brake_temperature_c');

const FEATHER_TOLERANCE = (2 * Math.PI) / 180;

const STOP_STATES: readonly OperatingState[] = ['normal stop', 'emergency stop', 'manual stop'];
const isStopping = OPERATING_STATES.map((state) => STOP_STATES.includes(state));

/** What the safety chain and the stop did. The stop begins with the first guard that fires, or the first stop state. */
export class StopMetrics implements MetricGroup {
  private readonly pitchAt: Int32Array;
  private readonly featheredFrom: number;
  private readonly stuck: ReadonlySet<number>;
  private readonly brakeSpeed: number;
  private readonly featherTime: Float64Array;
  private readonly brakePower = new Float64Array(1);
  private readonly peakAfterStop = new Maximum();
  private readonly brakeEnergy = new Integral();
  private readonly brakeTemperature = new Maximum();
  private trips = 0;
  private firstGuardTime = Number.NaN;
  private firstGuardNumber = Number.NaN;
  private stopTime = Number.NaN;
  private standstillTime = Number.NaN;

  constructor({ turbine, events }: ScenarioData) {
    this.pitchAt = bladeIndices('pitch_#_deg', turbine.rotor.bladeCount);
    this.featherTime = new Float64Array(turbine.rotor.bladeCount).fill(Number.NaN);
    this.featheredFrom = turbine.pitchDrive.feather - FEATHER_TOLERANCE;
    this.stuck = new Set(events.flatMap(({ action }) => (action.kind === 'pitch stuck' ? action.blades : [])));
    this.brakeSpeed = turbine.brake.side === 'low-speed shaft' ? SPEED : GENERATOR_SPEED;
  }

  /** Takes an event; those of a frame's instant come before the frame. */
  event({ kind, time }: RunEvent): void {
    if (kind === 'guard') {
      this.trips++;
      if (Number.isNaN(this.firstGuardTime)) this.firstGuardTime = time;
      if (Number.isNaN(this.stopTime)) this.stopTime = time;
    }
    if (kind === 'standstill' && time >= this.stopTime && Number.isNaN(this.standstillTime)) {
      this.standstillTime = time;
    }
  }

  frame(frame: Frame): void {
    const { time, values } = frame;
    this.brakePower[0] = Math.abs(values[BRAKE_TORQUE] * values[this.brakeSpeed]);
    this.brakeEnergy.add(this.brakePower, 0);
    this.brakeTemperature.add(values, BRAKE_TEMPERATURE);
    if (values[ACTIVE_GUARD] > 0 && Number.isNaN(this.firstGuardNumber)) {
      this.firstGuardNumber = values[ACTIVE_GUARD];
    }
    if (Number.isNaN(this.stopTime) && isStopping[values[STATE]]) this.stopTime = time;
    if (time >= this.stopTime) this.followStop(frame);
  }

  metrics(tick: number): Metric[] {
    const blades = [...this.featherTime];
    const moving = blades.filter((_, blade) => !this.stuck.has(blade));
    return fillMetrics('stop', STOP_METRICS, {
      trips: this.trips,
      first_guard_number: this.firstGuardNumber,
      first_guard_time_s: this.firstGuardTime,
      stop_to_feather_s: latest(blades) - this.stopTime,
      stop_to_feather_moving_s: latest(moving) - this.stopTime,
      stop_to_standstill_s: this.standstillTime - this.stopTime,
      rotor_speed_peak_after_stop_rpm: inChannelUnit('rotor_speed_rpm', this.peakAfterStop.result()),
      brake_energy_kj: this.brakeEnergy.result(tick) / 1e3,
      brake_temperature_peak_c: inChannelUnit('brake_temperature_c', this.brakeTemperature.result()),
    });
  }

  private followStop({ time, values }: Frame): void {
    this.peakAfterStop.add(values, SPEED);
    for (let blade = 0; blade < this.pitchAt.length; blade++) {
      const feathered = values[this.pitchAt[blade]] >= this.featheredFrom;
      if (feathered && Number.isNaN(this.featherTime[blade])) this.featherTime[blade] = time;
    }
  }
}

/** NaN when any instant is NaN, or when there is none. */
function latest(instants: readonly number[]): number {
  return instants.length === 0 ? Number.NaN : Math.max(...instants);
}
