/** A tower as a cylinder that the air flows round. */
export interface TowerShape {
  /** m */
  topDiameter: number;
  baseDiameter: number;
  hubHeight: number;
}

/**
 * Turns the wind at a place before the tower into what the tower leaves of it: potential flow about a cylinder of the
 * tower's radius a at that height, u = U (1 − a² (x² − y²)/(x² + y²)²), v = V − U · 2a²xy/(x² + y²)².
 * Source: Burton et al., *Wind Energy Handbook*, the section on tower shadow. Above the hub there is no tower; over one
 * diameter below it the shadow grows from nothing, since the blade's root passes there close to the nacelle.
 * @param x, y, z the place from the tower top, m, in the nacelle's frame
 * @param wind u and v in that frame, m/s, changed in place
 */
export function addTowerShadow(tower: TowerShape, x: number, y: number, z: number, wind: Float64Array): void {
  if (z >= 0) return;
  const { topDiameter, baseDiameter, hubHeight } = tower;
  const depth = Math.min(-z / topDiameter, 1);
  const a = 0.5 * (topDiameter + (baseDiameter - topDiameter) * Math.min(-z / hubHeight, 1));
  const x2 = x * x;
  const y2 = y * y;
  const r2 = x2 + y2;
  if (r2 <= a * a) return;
  const share = (depth * depth * (3 - 2 * depth) * a * a) / (r2 * r2);
  const u = wind[0];
  wind[0] = u * (1 - share * (x2 - y2));
  wind[1] -= u * 2 * share * x * y;
}
