/**
 * In which encoding the texts of a dBASE table are: the .cpg file beside it, the language driver in its header, or the bytes themselves.
 */
import { isUtf8 } from 'node:buffer';
import { isKnownEncoding } from './text-encoding.ts';

/** Language drivers of dBASE headers (byte 29) → the encoding as iconv knows it. Source: dBASE and FoxPro file formats, code page marks. */
const LANGUAGE_DRIVERS: Readonly<Record<number, string>> = {
  1: 'cp437',
  2: 'cp850',
  3: 'windows-1252',
  8: 'cp865',
  9: 'cp437',
  10: 'cp850',
  13: 'cp437',
  14: 'cp850',
  16: 'cp850',
  19: 'cp932',
  20: 'cp850',
  25: 'cp437',
  26: 'cp850',
  29: 'cp850',
  31: 'cp852',
  34: 'cp852',
  35: 'cp852',
  37: 'cp850',
  38: 'cp866',
  55: 'cp850',
  77: 'gbk',
  78: 'cp949',
  79: 'big5',
  80: 'windows-874',
  88: 'windows-1252',
  89: 'windows-1252',
  100: 'cp852',
  101: 'cp866',
  102: 'cp865',
  120: 'big5',
  121: 'cp949',
  122: 'gbk',
  123: 'cp932',
  124: 'windows-874',
  150: 'windows-1251',
  151: 'windows-1250',
  200: 'windows-1250',
  201: 'windows-1251',
  202: 'windows-1254',
  203: 'windows-1253',
  204: 'windows-1257',
};

export interface DbfEncoding {
  readonly name: string;
  readonly from: 'options' | 'cpg' | 'header' | 'content';
}

/**
 * The encoding of a table.
 *
 * @param given name in the options @param cpg text of the .cpg file @param driver byte 29 of the header @param sample bytes of its texts
 */
export function dbfEncoding(given: string | undefined, cpg: string | null, driver: number, sample: Uint8Array): DbfEncoding {
  if (given !== undefined && isKnownEncoding(given)) return { name: given, from: 'options' };
  const named = cpg === null ? null : encodingOfCpg(cpg);
  if (named !== null) return { name: named, from: 'cpg' };
  const plain = sample.every((byte) => byte < 128);
  if (!plain && isUtf8(sample)) return { name: 'utf-8', from: 'content' };
  const driven = LANGUAGE_DRIVERS[driver];
  if (driven !== undefined && isKnownEncoding(driven)) return { name: driven, from: 'header' };
  return { name: plain ? 'utf-8' : guessed(sample), from: 'content' };
}

/** @example encodingOfCpg('ANSI 1251') // 'windows-1251' */
function encodingOfCpg(text: string): string | null {
  const name = text
    .replace(/^\uFEFF/, '')
    .trim()
    .toLowerCase();
  const digits = /^(?:ansi|windows|cp|oem)?[\s_-]*(\d{3,5})$/.exec(name)?.[1];
  if (digits === '65001') return 'utf-8';
  if (digits === '8859') return 'iso-8859-1';
  if (digits !== undefined) return [`windows-${digits}`, `cp${digits}`].find(isKnownEncoding) ?? null;
  const latin = /^(?:iso)?[\s_-]*8859[\s_-]*(\d{1,2})$/.exec(name)?.[1];
  const plain = latin === undefined ? name : `iso-8859-${latin}`;
  return plain !== '' && isKnownEncoding(plain) ? plain : null;
}

/** Cyrillic words are runs of high bytes; in western European texts they stand alone among plain letters. */
function guessed(sample: Uint8Array): string {
  let high = 0;
  let runs = 0;
  for (let i = 0; i < sample.length; i++) {
    if (sample[i] < 0xc0) continue;
    high++;
    if (i === 0 || sample[i - 1] < 0xc0) runs++;
  }
  return runs > 0 && high / runs >= 3 ? 'windows-1251' : 'windows-1252';
}
