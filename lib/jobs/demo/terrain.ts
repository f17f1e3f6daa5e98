/**
 * The ground of the invented valley: a river running down a valley axis, benches rising on both sides, low alluvial fans.
 *
 * Everything here is made up. Plane coordinates are metres east and north of the headworks; valley coordinates are metres along the
 * axis (`along`) and across it (`across`, left of the river's course positive).
 */
export type PlanePoint = readonly [east: number, north: number];

/** Where the headworks are put [degrees]: an empty desert basin, so that nobody takes the demo for a real district. */
export const HEADWORKS = { longitude: -115.68, latitude: 38.31, elevation: 1485 } as const;

/** Length of the irrigated valley [m]. */
export const VALLEY_LENGTH = 30400;

/** Scales of a plane touching the ellipsoid at the headworks, rounded [m per degree]; straight lines stay straight in both. */
const METRES_PER_DEGREE = { longitude: 87430, latitude: 111000 } as const;
const AXIS = (24 * Math.PI) / 180;
const [COS, SIN] = [Math.cos(AXIS), Math.sin(AXIS)];
const RIVER_SLOPE = 0.0024;
const CANAL_GRADE = 0.0003;

export type Side = 1 | -1;

export function lonLat([east, north]: PlanePoint): [number, number] {
  return [
    round6(HEADWORKS.longitude + east / METRES_PER_DEGREE.longitude),
    round6(HEADWORKS.latitude + north / METRES_PER_DEGREE.latitude),
  ];
}

function round6(degrees: number): number {
  return Math.round(degrees * 1e6) / 1e6;
}

export function planeFromValley(along: number, across: number): PlanePoint {
  return [along * COS - across * SIN, along * SIN + across * COS];
}

export function valleyFromPlane([east, north]: PlanePoint): { along: number; across: number } {
  return { along: east * COS + north * SIN, across: -east * SIN + north * COS };
}

/** Across-coordinate of the river: long bends with shorter ones upon them [m]. */
export function riverAcross(along: number): number {
  const wave = (length: number, phase: number) => Math.sin((2 * Math.PI * along) / length + phase);
  const grow = smooth(along / 2500);
  return grow * (420 * wave(11300, 0.4) + 190 * wave(4300, 2.1) + 85 * wave(1730, 0.9) + 30 * wave(690, 2.6));
}

/** Ground elevation [m] at a distance from the river on one side. */
function groundElevation(along: number, distance: number, side: Side): number {
  const bed = HEADWORKS.elevation - 5 - RIVER_SLOPE * along;
  const steep = side === 1 ? 1 : 1.18;
  const terrace = 4 * smooth((distance - 110) / 160);
  const bench = Math.max(0, distance - 260) * 0.0046 + 9e-7 * distance * distance;
  return bed + terrace + steep * bench + fans(along, distance, side);
}

/** Low fans and hollows that make contour canals wind, growing from the river out to 2 km [m]. */
function fans(along: number, distance: number, side: Side): number {
  const reach = Math.min(1, Math.max(0, distance - 300) / 2000);
  const wave = (length: number, phase: number) => Math.sin((2 * Math.PI * along) / length + phase);
  return side === 1 ? reach * (3.4 * wave(6900, 0.7) + 1.6 * wave(2450, 1.9)) : reach * (3.1 * wave(5800, 2.9) + 1.7 * wave(2150, 0.2));
}

/** Elevation of a plane point [m]. */
export function elevationAt(point: PlanePoint): number {
  const { along, across } = valleyFromPlane(point);
  const offset = across - riverAcross(along);
  return groundElevation(along, Math.abs(offset), offset >= 0 ? 1 : -1);
}

/**
 * Distance from the river at which the ground stands at the level of a canal that left the headworks at the canal grade [m]:
 * the line a contour canal must follow. By bisection; the ground rises steadily away from the river.
 */
export function contourDistance(along: number, side: Side): number {
  const level = HEADWORKS.elevation - CANAL_GRADE * along;
  let [low, high] = [60, 12000];
  for (let i = 0; i < 50; i++) {
    const middle = (low + high) / 2;
    if (groundElevation(along, middle, side) < level) low = middle;
    else high = middle;
  }
  return 60 + (low - 60) * smooth((along + 400) / 2400);
}

/** 0 below 0, 1 above 1, smooth between. */
export function smooth(x: number): number {
  const t = Math.min(1, Math.max(0, x));
  return t * t * (3 - 2 * t);
}
