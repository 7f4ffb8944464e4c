/**
 * Density of dry air, kg/m³, by the standard atmosphere's pressure at an altitude and the temperature there.
 * ISO 2533:1975: p₀ = 101 325 Pa, T₀ = 288.15 K, lapse 6.5 K/km, R = 287.053 J/(kg K), g = 9.80665 m/s².
 * @param altitude of the hub above sea level, m; up to 11 km
 * @param temperature of the air there, K; the standard atmosphere's when absent
 */
export function airDensity(altitude: number, temperature?: number): number {
  const lapse = 0.0065;
  const gas = 287.053;
  const standard = 288.15 - lapse * altitude;
  // p = p₀ (1 − L h/T₀)^(g/(R L))
  const pressure = 101325 * (standard / 288.15) ** (9.80665 / (gas * lapse));
  return pressure / (gas * (temperature ?? standard));
}
