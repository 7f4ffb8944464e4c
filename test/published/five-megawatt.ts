/**
 * Data of the 5-MW reference turbine: Jonkman, Butterfield, Musial and Scott, "Definition of a 5-MW Reference Wind
 * Turbine for Offshore System Development", NREL/TP-500-38060, 2009. Written down from *memory* of the report.
 */
export const FIVE_MEGAWATT = {
  /** kg m² about the low-speed shaft: rotor and generator together. */
  drivetrainInertia: 43_784_725,
  /** kg m² about the high-speed shaft. */
  generatorInertia: 534.116,
  gearRatio: 97,
  /** N m/rad */
  shaftStiffness: 867_637_000,
  /** rpm */
  ratedRotorSpeed: 12.1,
  ratedGeneratorSpeed: 1173.7,
  /** W, and electrical over mechanical power. */
  ratedPower: 5e6,
  generatorEfficiency: 0.944,
  /** W/rad at zero pitch, and the pitch at which it has doubled, rad. */
  powerPerPitch: -25.52e6,
  halvingPitch: (6.302336 * Math.PI) / 180,
  /** rad/s and fraction of critical that the report asks of the speed loop. */
  loopFrequency: 0.6,
  loopDamping: 0.7,
};
