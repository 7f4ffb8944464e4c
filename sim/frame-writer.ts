import { CHANNELS, channelIndex } from './channels.ts';
import type { Plant } from './plant.ts';
import { electricalPower, type Sensors } from './sensors.ts';

const TURN = 2 * Math.PI;
/** Blades that the channels have room for. */
const MOST_BLADES = 3;

/** What the clock itself adds to a frame. */
export interface ControlStatus {
  readonly pitchDemand: ArrayLike<number>;
  /** N m */
  torqueDemand: number;
  /** Index into OPERATING_STATES. */
  state: number;
  /** 1 + index of the first latched guard, 0 for none. */
  activeGuard: number;
}

/** Fills a frame's values (SI, indexed as CHANNELS) from the plant's last `derivative` and the control's status. */
export function createFrameWriter(plant: Plant, sensors: Sensors) {
  const at = Object.fromEntries(CHANNELS.map((c) => [c.name, channelIndex(c.name)]));
  const velocity = new Float64Array(3);
  const d = plant.drivetrain.at;
  const bladeCount = plant.turbine.rotor.bladeCount;
  const hubHeight = plant.turbine.rotor.hubHeight;
  const resolved = plant.rotor.resolvesBlades;
  const pitch = at.pitch_1_deg;
  const pitchRate = at.pitch_rate_1_deg_s;
  const pitchDemand = at.pitch_demand_1_deg;
  const slot = {
    windHub: at.wind_hub_m_s,
    windRotor: at.wind_rotor_m_s,
    windMeasured: at.wind_measured_m_s,
    rotorSpeed: at.rotor_speed_rpm,
    rotorSpeedMeasured: at.rotor_speed_measured_rpm,
    generatorSpeed: at.generator_speed_rpm,
    generatorSpeedMeasured: at.generator_speed_measured_rpm,
    azimuth: at.azimuth_deg,
    torque: at.generator_torque_kn_m,
    torqueDemand: at.generator_torque_demand_kn_m,
    power: at.electrical_power_kw,
    thrust: at.thrust_kn,
    aerodynamicTorque: at.aerodynamic_torque_kn_m,
    shaftTorque: at.shaft_torque_kn_m,
    deflection: at.tower_deflection_m,
    acceleration: at.tower_acceleration_m_s2,
    baseMoment: at.tower_base_moment_mn_m,
    brakeTorque: at.brake_torque_kn_m,
    brakeTemperature: at.brake_temperature_c,
    state: at.state,
    activeGuard: at.active_guard,
    energyError: at.energy_error_kj,
    yawError: at.yaw_error_deg,
    heading: at.nacelle_heading_deg,
    sideDeflection: at.tower_side_deflection_m,
    sideAcceleration: at.tower_side_acceleration_m_s2,
    baseSideMoment: at.tower_base_side_moment_mn_m,
    tiltMoment: at.tower_top_tilt_moment_mn_m,
    yawMoment: at.tower_top_yaw_moment_mn_m,
    flapMoment: at.flap_moment_1_mn_m,
    edgeMoment: at.edge_moment_1_mn_m,
  };

  return function fill(
    t: number,
    x: ArrayLike<number>,
    memory: Float64Array,
    storedAtStart: number,
    status: ControlStatus,
    values: Float64Array,
  ): void {
    plant.wind.velocity(t, 0, 0, velocity);
    values[slot.windHub] = velocity[0];
    values[slot.windRotor] = plant.wind.rotorMean(t);
    values[slot.windMeasured] = sensors.windReading(memory);
    values[slot.rotorSpeed] = x[d + 1];
    values[slot.rotorSpeedMeasured] = sensors.protectionSpeed.reading(memory);
    values[slot.generatorSpeed] = x[d + 2];
    values[slot.generatorSpeedMeasured] = sensors.controlSpeed.reading(memory);
    values[slot.azimuth] = ((x[d] % TURN) + TURN) % TURN;
    for (let b = 0; b < bladeCount; b++) {
      values[pitch + b] = x[plant.pitch.angleAt + b];
      values[pitchRate + b] = x[plant.pitch.rateAt + b];
      values[pitchDemand + b] = status.pitchDemand[b];
    }
    values[slot.torque] = x[plant.generator.at];
    values[slot.torqueDemand] = status.torqueDemand;
    values[slot.power] = electricalPower(plant, x);
    values[slot.thrust] = plant.loads.thrust;
    values[slot.aerodynamicTorque] = plant.loads.torque;
    values[slot.shaftTorque] = plant.torques.shaft;
    values[slot.deflection] = x[plant.tower.at];
    values[slot.acceleration] = plant.towerAcceleration;
    values[slot.baseMoment] = plant.tower.restoringForce(x) * hubHeight;
    values[slot.brakeTorque] = plant.brakeTorque;
    values[slot.brakeTemperature] = x[plant.brake.at];
    values[slot.state] = status.state;
    values[slot.activeGuard] = status.activeGuard;
    values[slot.energyError] = plant.energyError(x, storedAtStart);
    values[slot.yawError] = plant.yawError;
    values[slot.heading] = x[plant.yaw.at];
    const sideways = plant.towerSideways;
    values[slot.sideDeflection] = sideways ? x[sideways.at] : Number.NaN;
    values[slot.sideAcceleration] = sideways ? plant.accelerations.sideSide : Number.NaN;
    values[slot.baseSideMoment] = sideways ? sideways.restoringForce(x) * hubHeight : Number.NaN;
    values[slot.tiltMoment] = resolved ? plant.loads.tiltMoment : Number.NaN;
    values[slot.yawMoment] = resolved ? plant.loads.yawMoment : Number.NaN;
    for (let b = 0; b < MOST_BLADES; b++) {
      values[slot.flapMoment + b] = b < bladeCount ? plant.loads.flapMoment[b] : Number.NaN;
      values[slot.edgeMoment + b] = b < bladeCount ? plant.loads.edgeMoment[b] : Number.NaN;
    }
  };
}
