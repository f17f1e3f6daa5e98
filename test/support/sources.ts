/** The project's own source files and what each imports. */
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, normalize } from 'node:path';

export interface SourceFile {
  /** path from the top of the project */
  readonly path: string;
  readonly text: string;
  readonly imports: readonly Imported[];
}

export interface Imported {
  /** project path for a relative import, else the package's name */
  readonly target: string;
  readonly relative: boolean;
  readonly typeOnly: boolean;
}

const FROM = /^\s*(?:import|export)\s+(type\s+)?(?:[^'"`;]*?\sfrom\s+)?['"]([^'"]+)['"]/gm;
const DYNAMIC = /\bimport\(\s*(?:\/\*[^*]*\*\/\s*)?['"]([^'"]+)['"]/g;

export function sourceFiles(folders: readonly string[]): SourceFile[] {
  return folders.flatMap((folder) =>
    readdirSync(folder, { recursive: true, encoding: 'utf8' })
      .filter((name) => /\.(ts|tsx|mts)$/.test(name))
      .map((name) => readSource(join(folder, name))),
  );
}

export function readSource(path: string): SourceFile {
  const text = readFileSync(path, 'utf8');
  return { path, text, imports: importsOf(path, text) };
}

export function importsOf(path: string, text: string): Imported[] {
  const found: Imported[] = [];
  for (const match of text.matchAll(FROM)) found.push(imported(path, match[2], match[1] !== undefined));
  for (const match of text.matchAll(DYNAMIC)) found.push(imported(path, match[1], false));
  return found;
}

function imported(path: string, specifier: string, typeOnly: boolean): Imported {
  const relative = specifier.startsWith('.');
  const target = relative ? normalize(join(dirname(path), specifier)) : specifier;
  return { target, relative, typeOnly };
}

/** Source text without comments, so that a word in a docstring is not taken for code. */
export function withoutComments(text: string): string {
  return text.replace(/\/\*[\s\S]*?\*\//g, '').replace(/(^|[^:'"`])\/\/.*$/gm, '$1');
}
