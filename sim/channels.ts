/**
 * The channels that a run can record, in a stable order. A frame holds NaN where the machine has no such value (a blade
 * that is not there, blade moments of a rotor that does not resolve blades, a tower without a side-side mode). Inside a frame they are SI; `unit` is what files and plots
 * show, `factor` its size in SI (a file's value times `factor`, plus `offset`, is the SI value).
 */
export interface Channel {
  readonly name: string;
  readonly label: string;
  readonly unit: string;
  readonly factor: number;
  readonly offset: number;
}

const RPM = Math.PI / 30;
const DEGREE = Math.PI / 180;

function channel(name: string, label: string, unit: string, factor = 1, offset = 0): Channel {
  return { name, label, unit, factor, offset };
}

function perBlade(make: (blade: number) => Channel): Channel[] {
  return [1, 2, 3].map(make);
}

export const CHANNELS: readonly Channel[] = [
  channel('wind_hub_m_s', 'Wind speed at the hub', 'm/s'),
  channel('wind_rotor_m_s', 'Rotor-effective wind speed', 'm/s'),
  channel('wind_measured_m_s', 'Nacelle anemometer', 'm/s'),
  channel('rotor_speed_rpm', 'Rotor speed', 'rpm', RPM),
  channel('rotor_speed_measured_rpm', 'Rotor speed, protection sensor', 'rpm', RPM),
  channel('generator_speed_rpm', 'Generator speed', 'rpm', RPM),
  channel('generator_speed_measured_rpm', 'Generator speed, control sensor', 'rpm', RPM),
  channel('azimuth_deg', 'Azimuth of blade 1', 'deg', DEGREE),
  ...perBlade((b) => channel(`pitch_${b}_deg`, `Pitch, blade ${b}`, 'deg', DEGREE)),
  ...perBlade((b) => channel(`pitch_rate_${b}_deg_s`, `Pitch rate, blade ${b}`, 'deg/s', DEGREE)),
  ...perBlade((b) => channel(`pitch_demand_${b}_deg`, `Pitch demand, blade ${b}`, 'deg', DEGREE)),
  channel('generator_torque_kn_m', 'Generator torque', 'kN m', 1e3),
  channel('generator_torque_demand_kn_m', 'Generator torque demand', 'kN m', 1e3),
  channel('electrical_power_kw', 'Electrical power', 'kW', 1e3),
  channel('thrust_kn', 'Rotor thrust', 'kN', 1e3),
  channel('aerodynamic_torque_kn_m', 'Aerodynamic torque', 'kN m', 1e3),
  channel('shaft_torque_kn_m', 'Low-speed shaft torque', 'kN m', 1e3),
  channel('tower_deflection_m', 'Tower-top deflection', 'm'),
  channel('tower_acceleration_m_s2', 'Tower-top acceleration', 'm/s²'),
  channel('tower_base_moment_mn_m', 'Tower-base bending moment', 'MN m', 1e6),
  channel('brake_torque_kn_m', 'Brake torque on its own shaft', 'kN m', 1e3),
  channel('brake_temperature_c', 'Brake disc temperature', '°C', 1, 273.15),
  channel('state', 'Operating state', '1'),
  channel('active_guard', 'First latched guard', '1'),
  channel('energy_error_kj', 'Energy account, unexplained', 'kJ', 1e3),
  channel('yaw_error_deg', 'Wind direction against the nacelle', 'deg', DEGREE),
  channel('nacelle_heading_deg', 'Heading of the nacelle', 'deg', DEGREE),
  channel('tower_side_deflection_m', 'Tower-top deflection to the left', 'm'),
  channel('tower_side_acceleration_m_s2', 'Tower-top acceleration to the left', 'm/s²'),
  channel('tower_base_side_moment_mn_m', 'Tower-base bending moment, side-side', 'MN m', 1e6),
  channel('tower_top_tilt_moment_mn_m', 'Tilting moment of the air on the tower top', 'MN m', 1e6),
  channel('tower_top_yaw_moment_mn_m', 'Yawing moment of the air on the tower top', 'MN m', 1e6),
  ...perBlade((b) => channel(`flap_moment_${b}_mn_m`, `Flapwise root moment, blade ${b}`, 'MN m', 1e6)),
  ...perBlade((b) => channel(`edge_moment_${b}_mn_m`, `Edgewise root moment, blade ${b}`, 'MN m', 1e6)),
];

/** Index of a channel in a frame, or -1. */
export function channelIndex(name: string): number {
  return CHANNELS.findIndex((c) => c.name === name);
}

/** SI value to the channel's own unit. */
export function toUnit(c: Channel, si: number): number {
  return (si - c.offset) / c.factor;
}

/** Value in the channel's own unit to SI. */
export function fromUnit(c: Channel, value: number): number {
  return value * c.factor + c.offset;
}
