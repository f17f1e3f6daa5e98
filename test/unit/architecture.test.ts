/** The import rule of the rooms, and what each room may never mention. A breach names the file and what it reached for. */
import { existsSync, readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { importsOf, type SourceFile, sourceFiles, withoutComments } from '../support/sources.ts';

/** Order of the rooms: each may import only from those before it. */
const PURE_ROOMS = ['base', 'geo', 'weather', 'energy', 'crop', 'season', 'canal', 'allocation', 'report'];
/** What the rooms outside the pure ones may reach for among lib and db. */
const MAY_IMPORT: Record<string, readonly string[]> = {
  files: ['base', 'geo', 'weather', 'energy', 'report'],
  access: ['base', 'db'],
  jobs: [...PURE_ROOMS, 'files', 'access', 'db'],
  http: [...PURE_ROOMS, 'files', 'access', 'jobs', 'db'],
  start: [...PURE_ROOMS, 'files', 'access', 'jobs', 'http', 'db'],
  db: ['base'],
};
/** Type-only imports a room may make beyond the rule. */
const TYPES_ALSO: Record<string, readonly string[]> = { db: [...PURE_ROOMS, 'files'], files: ['season', 'canal'] };
const NEVER_IN_PURE = [/\bfrom 'node:/, /\bprocess\./, /\bDate\.now\b/, /\bnew Date\(\)/, /\bMath\.random\b/, /\bconsole\./, /\bfetch\(/];
/** Packages that live in one place. */
const HOME_OF: Record<string, RegExp> = {
  zod: /^lib\/(http|access)\//,
  postgres: /^(db|test)\//,
  'drizzle-orm': /^(db|test)\//,
  'maplibre-gl': /^app\//,
  '@turf/turf': /^lib\/geo\//,
  'geographiclib-geodesic': /^(lib\/geo|test)\//,
  next: /^(app|lib\/start|lib\/http|lib\/access)\//,
};

const files = sourceFiles(['app', 'lib', 'db']);

function roomOf(path: string): string {
  const [top, second] = path.split('/');
  return top === 'lib' ? second : top;
}

function allowedRooms(room: string, typeOnly: boolean): readonly string[] | null {
  if (room === 'app') return null;
  const place = PURE_ROOMS.indexOf(room);
  const rooms = place >= 0 ? PURE_ROOMS.slice(0, place) : (MAY_IMPORT[room] ?? []);
  return typeOnly ? [...rooms, ...(TYPES_ALSO[room] ?? [])] : rooms;
}

function breaches(file: SourceFile): string[] {
  const room = roomOf(file.path);
  return file.imports
    .filter(({ target, relative, typeOnly }) => {
      if (!relative) return false;
      const reached = roomOf(target);
      const allowed = allowedRooms(room, typeOnly);
      return reached !== room && allowed !== null && !allowed.includes(reached);
    })
    .map(({ target }) => `${file.path} imports ${target}`);
}

function foreignPackages(file: SourceFile): string[] {
  return file.imports
    .filter(({ target, relative, typeOnly }) => {
      if (relative || (typeOnly && target.startsWith('maplibre'))) return false;
      const home = Object.entries(HOME_OF).find(([name]) => target === name || target.startsWith(`${name}/`));
      return home !== undefined && !home[1].test(file.path);
    })
    .map(({ target }) => `${file.path} imports ${target}`);
}

describe('rooms', () => {
  it('import only from the rooms above them', () => {
    expect(files.flatMap(breaches)).toEqual([]);
  });

  it('are seen to refuse a breach', () => {
    const path = 'lib/energy/example.ts';
    const text = "import { a } from '../season/day.ts';";
    expect(breaches({ path, text, imports: importsOf(path, text) })).toEqual(['lib/energy/example.ts imports lib/season/day.ts']);
    const client = "import postgres from 'postgres';";
    expect(foreignPackages({ path, text: client, imports: importsOf(path, client) })).toHaveLength(1);
  });

  it('keep each single-home package in its home', () => {
    expect(files.flatMap(foreignPackages)).toEqual([]);
  });

  it('are pure where they are numeric: no clock, chance, files, network or console', () => {
    const pure = files.filter((file) => file.path.startsWith('lib/') && PURE_ROOMS.includes(roomOf(file.path)));
    expect(pure.length).toBeGreaterThan(30);
    const found = pure.flatMap((file) => {
      const code = withoutComments(file.text);
      return NEVER_IN_PURE.filter((pattern) => pattern.test(code)).map((pattern) => `${file.path} has ${pattern.source}`);
    });
    expect(found).toEqual([]);
  });

  it('read the environment in one place', () => {
    const readers = files.filter(
      (file) => /process\.env/.test(withoutComments(file.text)) && !/^lib\/(start|access\/environment)/.test(file.path),
    );
    expect(readers.map((file) => file.path)).toEqual([]);
  });

  it('have no cycles', () => {
    expect(cycles(files)).toEqual([]);
  });
});

describe('browser code', () => {
  it('imports only pure rooms, contract types and its own components', () => {
    const client = files.filter((file) => /^['"]use client['"]/m.test(file.text));
    const found = client.flatMap((file) =>
      file.imports
        .filter(({ target, relative, typeOnly }) => {
          if (!relative || target.startsWith('app/')) return false;
          const contract = typeOnly && target.startsWith('lib/http/contract/');
          return (
            !contract &&
            !(target.startsWith('lib/') && PURE_ROOMS.includes(roomOf(target))) &&
            !(typeOnly && target.startsWith('lib/files/'))
          );
        })
        .map(({ target }) => `${file.path} imports ${target}`),
    );
    expect(found).toEqual([]);
  });
});

describe('top level', () => {
  it('holds what the project is made of and no more', () => {
    const allowed = [
      'package.json',
      'package-lock.json',
      'next.config.mjs',
      'tsconfig.json',
      'drizzle.config.ts',
      'README.md',
      'DEVELOPERS.md',
      'LICENSE',
      'app',
      'lib',
      'db',
      'test',
      'e2e',
    ];
    const generated = ['node_modules', 'next-env.d.ts', 'tsconfig.tsbuildinfo', 'test-results'];
    const extra = readdirSync('.').filter((name) => !name.startsWith('.') && !allowed.includes(name) && !generated.includes(name));
    expect(extra).toEqual([]);
    for (const name of allowed) expect(existsSync(name), name).toBe(true);
  });
});

function cycles(all: readonly SourceFile[]): string[] {
  const graph = new Map(all.map((file) => [file.path, file.imports.filter((i) => i.relative && !i.typeOnly).map((i) => i.target)]));
  const state = new Map<string, 'open' | 'closed'>();
  const found: string[] = [];
  const visit = (path: string, trail: readonly string[]) => {
    if (state.get(path) === 'closed' || !graph.has(path)) return;
    if (state.get(path) === 'open') {
      found.push([...trail.slice(trail.indexOf(path)), path].join(' → '));
      return;
    }
    state.set(path, 'open');
    for (const next of graph.get(path) ?? []) visit(next, [...trail, path]);
    state.set(path, 'closed');
  };
  for (const path of graph.keys()) visit(path, []);
  return found;
}
