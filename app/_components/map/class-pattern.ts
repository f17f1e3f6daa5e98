/** The print patterns of the classes as repeating pixels, so that a printed class is never colour alone. */
import { PRINT_PATTERNS } from '../../../lib/report/colour-scale.ts';

/** Pixels to a point; the map draws the images at this ratio. */
export const PATTERN_RATIO = 2;
const STROKE = 1.6;
const STRENGTH = 200;

export function patternName(pattern: number): string {
  return `class-${pattern}`;
}

export interface PatternImage {
  readonly width: number;
  readonly height: number;
  /** RGBA, black ink on nothing */
  readonly data: Uint8ClampedArray;
}

/** One repeat of a pattern of PRINT_PATTERNS. Slanted lines `spacing` apart repeat every spacing × √2 along both axes. */
export function patternImage(pattern: number): PatternImage {
  const lines = PRINT_PATTERNS[pattern];
  if (lines.length === 0) return { width: 1, height: 1, data: new Uint8ClampedArray(4) };
  const slanted = lines[0].angle % 90 !== 0;
  const size = Math.round(lines[0].spacing * PATTERN_RATIO * (slanted ? Math.SQRT2 : 1));
  const data = new Uint8ClampedArray(size * size * 4);
  for (let y = 0; y < size; y++) {
    for (let x = 0; x < size; x++) {
      const ink = lines.reduce((most, line) => Math.max(most, lineInk(x, y, line.angle, size)), 0);
      data[(y * size + x) * 4 + 3] = Math.round(ink * STRENGTH);
    }
  }
  return { width: size, height: size, data };
}

/** Coverage 0–1 of a pixel by the line through the origin at an angle of 0, 45, 90 or 135 degrees, repeated every `size`. */
function lineInk(x: number, y: number, angle: number, size: number): number {
  const across = angle === 0 ? y : angle === 90 ? x : angle === 45 ? x + y : x - y;
  const off = Math.abs(across - size * Math.round(across / size)) / (angle % 90 === 0 ? 1 : Math.SQRT2);
  return Math.max(0, Math.min(1, STROKE / 2 + 0.5 - off));
}
