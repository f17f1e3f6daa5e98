/**
 * Seeded chance. No room below `jobs` draws from Math.random: a generator comes in as an argument.
 */
export type Random = () => number;

/**
 * Mulberry32 generator: uniform on [0, 1), period 2³².
 *
 * @param seed any 32-bit integer
 * Source: T. Ettinger, "mulberry32" (public domain, 2017).
 */
export function mulberry32(seed: number): Random {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/**
 * Standard normal deviate by the Box–Muller transform.
 *
 * Source: Box & Muller (1958), Annals of Mathematical Statistics 29, 610–611.
 */
export function normalDeviate(random: Random): number {
  const u = 1 - random();
  return Math.sqrt(-2 * Math.log(u)) * Math.cos(2 * Math.PI * random());
}
