/** What the code says of itself: exported equations and constants with the source their comment names. */

export interface DocumentedExport {
  readonly name: string;
  readonly kind: 'constant' | 'equation';
  /** first sentence of the comment */
  readonly says: string;
  /** formula lines of the comment */
  readonly formula: readonly string[];
  /** the value as written, for a constant of one line */
  readonly value: string | null;
  readonly source: string;
}

const EXPORT = /\/\*\*((?:(?!\*\/)[\s\S])*)\*\/\s*export (const|function) (\w+)([^\n]*)/g;

/** Exports of a file whose comment names a source, in the order of the file. */
export function documentedExports(text: string): DocumentedExport[] {
  return [...text.matchAll(EXPORT)].flatMap(([, comment, keyword, name, rest]) => {
    const lines = linesOf(comment);
    const source = sourceOf(lines);
    if (!source) return [];
    const constant = keyword === 'const';
    return [
      {
        name,
        kind: constant ? 'constant' : 'equation',
        says: firstSentence(lines),
        formula: formulaOf(lines),
        value: constant ? valueWritten(rest) : null,
        source,
      },
    ];
  });
}

/** Lines of a comment without its stars, with the indentation that marks a formula kept. */
function linesOf(comment: string): string[] {
  return comment.split('\n').map((line) => line.replace(/^\s*\* ?/, '').trimEnd());
}

function sourceOf(lines: readonly string[]): string | null {
  const at = lines.findIndex((line) => line.includes('Source:'));
  if (at < 0) return null;
  const first = lines[at].slice(lines[at].indexOf('Source:') + 7);
  const more: string[] = [];
  for (const line of lines.slice(at + 1)) {
    if (line.trim() === '' || line.trim().startsWith('@')) break;
    more.push(line.trim());
  }
  return [first.trim(), ...more].join(' ');
}

function firstSentence(lines: readonly string[]): string {
  const start = lines.findIndex((line) => line.trim() !== '');
  const paragraph: string[] = [];
  for (const line of lines.slice(Math.max(0, start))) {
    if (line.trim() === '' || /^\s{2,}\S/.test(line) || line.startsWith('@')) break;
    paragraph.push(line.trim());
  }
  const text = paragraph.join(' ').split('Source:')[0].trim();
  return /^.*?[.:](?=\s+[A-Z@]|$)/.exec(text)?.[0] ?? text;
}

function formulaOf(lines: readonly string[]): string[] {
  return lines.filter((line) => /^ {2,}\S/.test(line) && line.includes('=') && !line.includes('Source:')).map((line) => line.trim());
}

function valueWritten(rest: string): string | null {
  const value = /^(?::[^=]+)?\s*=\s*(.+);\s*$/.exec(rest)?.[1];
  return value && !value.startsWith('{') && !value.startsWith('[') ? value : null;
}
