/** A turbine as the simulation sees it: plain data in SI units and radians. Files are read by `scenarios/`. */

/** An airfoil's polar: a table, or the parameters of the documented formula of `aerodynamics/airfoil.ts`. */
export type AirfoilData =
  | {
      kind: 'table';
      name: string;
      /** Angle of attack, rad, rising. A table short of ±π is carried on by Viterna and Corrigan's extension. */
      angle: readonly number[];
      lift: readonly number[];
      drag: readonly number[];
      /** Aspect ratio for the extension's flat-plate drag. */
      aspectRatio: number;
    }
  | {
      kind: 'formula';
      name: string;
      /** Thickness over chord; 1 is a cylinder. */
      thickness: number;
      /** Lift slope of the attached flow, 1/rad. */
      liftSlope: number;
      /** rad */
      zeroLiftAngle: number;
      /** Largest lift coefficient, and the lowest drag coefficient. */
      maximumLift: number;
      minimumDrag: number;
      /** Aspect ratio of the blade, for the flat-plate extension. */
      aspectRatio: number;
    };

export interface BladeStation {
  /** From the rotor axis, m. */
  radius: number;
  /** m */
  chord: number;
  /** rad, positive towards feather. */
  twist: number;
  /** Name of an airfoil. */
  airfoil: string;
}

/** A blade as stations, or as the rule that lays the stations out. */
export type BladeData =
  | { kind: 'stations'; stations: readonly BladeStation[] }
  | {
      kind: 'optimum layout';
      designTipSpeedRatio: number;
      /** Angle of attack that the rule gives every working section, rad. */
      designAngleOfAttack: number;
      /** Largest chord and largest twist, m and rad. */
      chordLimit: number;
      twistLimit: number;
      /** Diameter of the cylindrical root, m, and the radius where it ends, m. */
      rootDiameter: number;
      rootEnd: number;
      /** Number of stations. */
      stations: number;
      /** Airfoils by relative radius (r/R), rising; sections between blend. */
      sections: readonly { relativeRadius: number; airfoil: string }[];
    };

/** Power, thrust (and optionally torque) coefficient against tip-speed ratio (rows) and pitch (columns). */
export interface CoefficientTables {
  tipSpeedRatio: readonly number[];
  /** rad */
  pitch: readonly number[];
  /** One row per tip-speed ratio. Torque coefficient C_q = C_p/λ; tables that start at λ = 0 give it directly. */
  torqueCoefficient: readonly (readonly number[])[];
  thrustCoefficient: readonly (readonly number[])[];
}

export type RotorAerodynamics =
  | {
      kind: 'blade';
      blade: BladeData;
      airfoils: readonly AirfoilData[];
    }
  | { kind: 'tables'; tables: CoefficientTables };

/** Mass of a blade and its first flap mode. */
export interface BladeStructureData {
  /** Mass per metre (kg/m) against radius from the rotor axis (m, rising); linear between, constant beyond the ends. */
  radius: readonly number[];
  massPerLength: readonly number[];
  flap: {
    /** At standstill, Hz. */
    frequency: number;
    /** Fraction of critical, of the structure alone. */
    dampingRatio: number;
    /** Deflection over that of the tip, as coefficients of s², s³, … of the relative span s (0 root, 1 tip); sum 1. */
    shape: readonly number[];
  };
}

export interface RotorData {
  bladeCount: number;
  /** Tip radius and hub radius from the rotor axis, m. */
  radius: number;
  hubRadius: number;
  hubHeight: number;
  /** Nose up, and blades leaning upwind, rad; from the tower axis to the hub, m. Zero when absent. */
  tilt?: number;
  cone?: number;
  overhang?: number;
  /** Rigid blades without weight when absent. */
  structure?: BladeStructureData;
  aerodynamics: RotorAerodynamics;
}

export interface DrivetrainData {
  kind: 'two masses' | 'rigid';
  /** Rotor side (blades, hub, main shaft), kg m², and generator side on the high-speed shaft, kg m². */
  rotorInertia: number;
  generatorInertia: number;
  gearRatio: number;
  /** Torsional stiffness and damping referred to the low-speed shaft, N m/rad and N m s/rad. Unused when rigid. */
  stiffness: number;
  damping: number;
  /** Mechanical efficiency of the gearbox. */
  gearEfficiency: number;
  /** Bearing and windage loss on the low-speed shaft: constant part N m, viscous part N m s/rad. */
  constantLoss: number;
  viscousLoss: number;
}

export interface TowerData {
  /** Generalised mass of the first fore-aft mode at the tower top, kg. */
  modalMass: number;
  /** Hz */
  frequency: number;
  /** Fraction of critical. */
  dampingRatio: number;
  /** The first side-side mode, in the same terms; a tower without one does not move sideways. */
  sideSide?: { modalMass: number; frequency: number; dampingRatio: number };
  /** Outer diameter at the top and at the base, m; a tower without one throws no shadow. */
  topDiameter?: number;
  baseDiameter?: number;
}

/** The drive that turns the nacelle into the wind. */
export interface YawDriveData {
  /** rad/s */
  rate: number;
  /** The drive starts when the nacelle is further off the filtered wind direction than this, rad. */
  deadBand: number;
  /** Time constant of that filter, s. */
  vaneTimeConstant: number;
}

export interface PitchDriveData {
  /** Second order from demand to angle: Hz, and fraction of critical. */
  naturalFrequency: number;
  dampingRatio: number;
  /** Transport delay from demand to drive, s. */
  delay: number;
  /** rad/s on grid supply, rad/s². */
  rateLimit: number;
  accelerationLimit: number;
  /** Travel limits, rad. */
  minimum: number;
  maximum: number;
  feather: number;
  /** What drives the blades without the grid: rate against the travel already spent, linear between points. */
  backup: { travel: readonly number[]; rate: readonly number[] };
}

export interface GeneratorData {
  /** Electrical over mechanical power. */
  efficiency: number;
  /** First-order lag of the torque, s. */
  timeConstant: number;
  /** N m and N m/s on the high-speed shaft. */
  maximumTorque: number;
  torqueRateLimit: number;
  /** Time constant with which torque vanishes when the grid is lost, s. */
  gridLossTimeConstant: number;
}

export interface BrakeData {
  side: 'low-speed shaft' | 'high-speed shaft';
  /** Full torque on its own shaft, N m. */
  torque: number;
  /** From order to first torque, s, and from first to full torque, s. */
  delay: number;
  ramp: number;
  /** Heat capacity J/K and loss to the surroundings W/K. */
  heatCapacity: number;
  cooling: number;
  /** Surroundings and start temperature, K. */
  ambient: number;
  /** Torque is full up to `fadeStart` and falls linearly to `fadeFloor` (fraction) at `fadeEnd`; K. */
  fadeStart: number;
  fadeEnd: number;
  fadeFloor: number;
}

export interface SpeedSensorData {
  /** Low-pass time constant, s; 0 for none. */
  timeConstant: number;
  /** Smallest step it reports, rad/s; 0 for none. */
  resolution: number;
  /** Standard deviation of its noise, rad/s. */
  noise: number;
  /** Largest speed it reports, rad/s. */
  range: number;
}

/** `surface`: the rotor as a whole, fast. `blade element`: every section of every blade in time. */
export type RotorModel = 'surface' | 'blade element';

export interface Turbine {
  name: string;
  /** What scenarios use that do not say; `surface` when absent. */
  rotorModel?: RotorModel;
  ratings: {
    /** Electrical, W. */
    power: number;
    /** rad/s */
    rotorSpeed: number;
    /** Rotor speed that must never be exceeded, rad/s. */
    neverExceedSpeed: number;
    /** Lowest rotor speed in power production, rad/s. */
    minimumSpeed: number;
    cutInWind: number;
    cutOutWind: number;
    /** Lowest pitch in power production, rad. */
    finePitch: number;
  };
  /** kg/m³ */
  airDensity: number;
  rotor: RotorData;
  drivetrain: DrivetrainData;
  tower: TowerData;
  /** A nacelle without one keeps its heading. */
  yawDrive?: YawDriveData;
  pitchDrive: PitchDriveData;
  generator: GeneratorData;
  brake: BrakeData;
  sensors: {
    /** Encoder on the generator shaft, read by the control law. */
    controlSpeed: SpeedSensorData;
    /** Pulse wheel on the rotor shaft, read by the protection. */
    protectionSpeed: SpeedSensorData;
    /** Time constant of the nacelle anemometer, s. */
    windTimeConstant: number;
  };
}
