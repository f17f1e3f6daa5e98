'use client';

import { useEffect, useRef } from 'react';
import { patternImage } from './class-pattern.ts';

/** Pixels of the swatch; it is shown at half that, as the map's patterns are. */
const SIDE = 32;

/** A class's colour, and over it the same pattern that the map prints. */
export function ClassSwatch({ colour, pattern, shown }: { colour: string; pattern: number; shown: boolean }) {
  const canvas = useRef<HTMLCanvasElement>(null);
  useEffect(() => {
    const context = canvas.current?.getContext('2d');
    if (!context) return;
    context.clearRect(0, 0, SIDE, SIDE);
    if (pattern <= 0 || !shown) return;
    const { width, height, data } = patternImage(pattern);
    const pixels = new ImageData(width, height);
    pixels.data.set(data);
    for (let y = 0; y < SIDE; y += height) for (let x = 0; x < SIDE; x += width) context.putImageData(pixels, x, y);
  }, [pattern, shown]);
  return (
    // biome-ignore lint/a11y/noAriaHiddenOnFocusable: a canvas without content takes no focus
    <canvas
      ref={canvas}
      width={SIDE}
      height={SIDE}
      aria-hidden="true"
      style={{ width: 16, height: 16, background: colour, border: '1px solid var(--edge)' }}
    />
  );
}
