/**
 * Crop codes of a file → crops of the library.
 */
import { wordsOf } from './column-name.ts';
import type { CropCount, ImportContext, ImportOptions } from './reading.ts';

/** Likeness from which a crop is proposed, 0–1. */
const PROPOSE_FROM = 0.55;

/**
 * Crop of every foreign code: from the options, from the stored mappings, by equal code or name. A merely similar name is proposed and not
 * applied.
 *
 * @param counts foreign code → number of features or rows
 * @returns most frequent first
 */
export function proposeCrops(counts: ReadonlyMap<string, number>, options: ImportOptions, context: ImportContext): CropCount[] {
  return [...counts]
    .map(([foreignCode, count]): CropCount => ({ foreignCode, count, ...findCrop(foreignCode, options, context) }))
    .sort((a, b) => b.count - a.count || (a.foreignCode < b.foreignCode ? -1 : 1));
}

function findCrop(foreign: string, options: ImportOptions, context: ImportContext): Pick<CropCount, 'cropCode' | 'by' | 'proposed'> {
  const exists = (code: string | null | undefined) => code === null || context.crops.some((crop) => crop.code === code);
  for (const [by, mappings] of [
    ['option', options.cropMappings],
    ['stored', context.cropMappings],
  ] as const) {
    if (mappings && Object.hasOwn(mappings, foreign) && exists(mappings[foreign]))
      return { cropCode: mappings[foreign], by, proposed: mappings[foreign] };
  }
  const key = keyOf(foreign);
  const byCode = context.crops.find((crop) => keyOf(crop.code) === key);
  if (byCode) return { cropCode: byCode.code, by: 'code', proposed: byCode.code };
  const byName = context.crops.filter((crop) => keyOf(crop.name) === key);
  if (byName.length === 1) return { cropCode: byName[0].code, by: 'name', proposed: byName[0].code };
  const proposed = mostSimilar(foreign, context);
  return { cropCode: null, by: proposed ? 'similar' : null, proposed };
}

function keyOf(text: string): string {
  return wordsOf(text).map(singular).join(' ');
}

function singular(word: string): string {
  if (/(ss|us|is)$/.test(word) || word.length < 4) return word;
  if (word.endsWith('ies')) return `${word.slice(0, -3)}y`;
  if (word.endsWith('oes')) return word.slice(0, -2);
  return word.endsWith('s') ? word.slice(0, -1) : word;
}

function mostSimilar(foreign: string, { crops }: ImportContext): string | null {
  const words = new Set(wordsOf(foreign).map(singular));
  let best: { code: string; score: number } | null = null;
  for (const crop of crops) {
    const score = likeness(words, new Set(wordsOf(crop.name).map(singular)));
    if (score >= PROPOSE_FROM && (!best || score > best.score)) best = { code: crop.code, score };
  }
  return best?.code ?? null;
}

/** Shared words over words of the shorter name, weighed down when the longer has many more. */
function likeness(a: ReadonlySet<string>, b: ReadonlySet<string>): number {
  const shared = [...a].filter((word) => b.has(word) && word.length > 2).length;
  const shorter = Math.min(a.size, b.size);
  const longer = Math.max(a.size, b.size);
  return shorter === 0 ? 0 : 0.6 * (shared / shorter) + 0.4 * (shared / longer);
}
