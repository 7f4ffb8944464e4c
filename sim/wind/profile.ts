/** Mean wind against height: the power law and the logarithmic law. */
import { steadyWind } from './steady.ts';
import type { WindField } from './wind.ts';

export type Profile =
  /** V(z) = V_hub (z/z_hub)^α. IEC 61400-1 takes α = 0.2 for normal, 0.11 for extreme wind. */
  | { kind: 'power law'; exponent: number }
  /** V(z) = V_hub ln(z/z₀)/ln(z_hub/z₀) over ground of roughness length z₀, m. */
  | { kind: 'logarithmic'; roughness: number };

export interface ProfiledSite {
  /** Of the hub above ground, and of the rotor, m. */
  hubHeight: number;
  rotorRadius: number;
}

/**
 * Wind at a height above ground (m) over the wind at the hub. Nothing blows at or below the ground, or below the
 * roughness length.
 * @throws RangeError when the roughness length is not between 0 and the hub's height
 */
export function profileFactor(profile: Profile, hubHeight: number): (height: number) => number {
  if (profile.kind === 'power law') {
    const { exponent } = profile;
    return (height) => (height > 0 ? (height / hubHeight) ** exponent : 0);
  }
  const { roughness } = profile;
  if (!(roughness > 0 && roughness < hubHeight)) {
    throw new RangeError(
      `the roughness length must lie between 0 and the hub's height, ${hubHeight} m, but it is ${roughness} m`,
    );
  }
  const atHub = Math.log(hubHeight / roughness);
  return (height) => (height > roughness ? Math.log(height / roughness) / atHub : 0);
}

/**
 * The hub wind of `hub` with a profile over the height: along the axis it is multiplied, cross winds are kept. What the
 * `surface` rotor feels is the mean over the disc.
 * @throws RangeError as `profileFactor`, and when the rotor reaches the ground
 */
export function profiledWind(hub: WindField, profile: Profile, { hubHeight, rotorRadius }: ProfiledSite): WindField {
  if (!(hubHeight > rotorRadius)) {
    throw new RangeError(
      `a rotor of ${rotorRadius} m radius does not clear the ground at a hub height of ${hubHeight} m`,
    );
  }
  const factor = profileFactor(profile, hubHeight);
  const discMean = meanOverDisc((_y, z) => factor(hubHeight + z), rotorRadius);
  const overRotor = tabled((z) => factor(hubHeight + z), Math.min(TABLE_REACH * rotorRadius, 0.99 * hubHeight));
  const atHub = new Float64Array(3);
  let askedAt = Number.NaN;
  return {
    ...hub,
    uniform: false,
    velocity(t, y, z, out) {
      if (hub.uniform !== true || t !== askedAt) {
        hub.velocity(t, y, z, atHub);
        askedAt = t;
      }
      out[0] = atHub[0] * overRotor(z);
      out[1] = atHub[1];
      out[2] = atHub[2];
    },
    rotorMean: (t) => hub.rotorMean(t) * discMean,
  };
}

/** A steady mean wind, `speed` m/s at the hub, with a profile. */
export function profileWind({
  speed,
  profile,
  ...site
}: ProfiledSite & { speed: number; profile: Profile }): WindField {
  return profiledWind(steadyWind({ speed }), profile, site);
}

/** How far from the hub a table of the profile reaches, in rotor radii: blades bend. Its rows are even, with one at the hub. */
const TABLE_REACH = 1.1;
const TABLE_ROWS = 4097;

/** `value` from −reach to reach as a table, linear between its rows: powers and logarithms take too long for every section. */
function tabled(value: (z: number) => number, reach: number): (z: number) => number {
  const last = TABLE_ROWS - 1;
  const perMetre = last / (2 * reach);
  const rows = Float64Array.from({ length: TABLE_ROWS }, (_, row) => value(((2 * row) / last - 1) * reach));
  return (z) => {
    const place = (z + reach) * perMetre;
    if (!(place >= 0 && place < last)) return value(z);
    const row = Math.floor(place);
    return rows[row] + (place - row) * (rows[row + 1] - rows[row]);
  };
}

/** Mean of `value` over a disc about the hub: midpoints of rings of equal area and of equal sectors. */
function meanOverDisc(value: (y: number, z: number) => number, radius: number): number {
  const rings = 40;
  const sectors = 72;
  let sum = 0;
  for (let ring = 0; ring < rings; ring++) {
    const r = radius * Math.sqrt((ring + 0.5) / rings);
    for (let sector = 0; sector < sectors; sector++) {
      const azimuth = (2 * Math.PI * (sector + 0.5)) / sectors;
      sum += value(-r * Math.sin(azimuth), r * Math.cos(azimuth));
    }
  }
  return sum / (rings * sectors);
}
