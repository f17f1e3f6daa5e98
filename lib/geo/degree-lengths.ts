/**
 * Metres of a degree on the WGS 84 ellipsoid.
 */

/** Semi-major axis [m] and squared eccentricity of the WGS 84 ellipsoid. Source: NGA.STND.0036 (2014), Table 3.1 (recalled). */
const SEMI_MAJOR = 6_378_137;
const ECCENTRICITY_SQUARED = 0.0066943799901413165;
const RADIANS = Math.PI / 180;

/**
 * Lengths of one degree of longitude and of latitude, at a latitude.
 *   N cos φ · π/180 and M · π/180
 *
 * @param latitude [degrees] @returns [m degree⁻¹]
 * @example degreeLengths(0).east // 111319.49
 * Source: Snyder (1987), USGS Professional Paper 1395, Eq. 4-18 and 4-20 (recalled): the radii of curvature M and N.
 */
export function degreeLengths(latitude: number): { east: number; north: number } {
  const sine = Math.sin(latitude * RADIANS);
  const curve = 1 - ECCENTRICITY_SQUARED * sine * sine;
  const prime = SEMI_MAJOR / Math.sqrt(curve);
  return { east: prime * Math.cos(latitude * RADIANS) * RADIANS, north: ((prime * (1 - ECCENTRICITY_SQUARED)) / curve) * RADIANS };
}
