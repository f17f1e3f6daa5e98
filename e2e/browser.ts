/** Which Chromium the browser tests drive: CHROMIUM_PATH, else the one in node_modules, else one on PATH, else Playwright's own. */
import { existsSync, mkdirSync } from 'node:fs';
import { tmpdir, userInfo } from 'node:os';
import { delimiter, join } from 'node:path';

export interface Browser {
  readonly executablePath: string;
  readonly env: Record<string, string>;
  readonly args: readonly string[];
  readonly source: string;
}

const BUNDLED_VERSION = '147.0.0';
/** WebGL by software, no sandbox inside containers, and none of Chromium's own calls home. */
const ARGS = [
  '--no-sandbox',
  '--use-angle=swiftshader',
  '--enable-unsafe-swiftshader',
  '--ignore-gpu-blocklist',
  '--disable-quic',
  '--disable-sync',
  '--disable-background-networking',
  '--disable-component-update',
  '--no-first-run',
];
const NAMES = ['chromium', 'chromium-browser', 'google-chrome'];

function ownEnvironment(): Record<string, string> {
  return Object.fromEntries(Object.entries(process.env).filter((entry): entry is [string, string] => entry[1] !== undefined));
}

/** @throws Error naming the three ways to give a browser */
export async function findBrowser(): Promise<Browser> {
  const given = process.env.CHROMIUM_PATH;
  if (given) return { executablePath: given, env: ownEnvironment(), args: ARGS, source: 'CHROMIUM_PATH' };
  if (process.platform === 'linux' && process.arch === 'x64') return bundled();
  const onPath = (process.env.PATH ?? '')
    .split(delimiter)
    .flatMap((folder) => NAMES.map((name) => join(folder, name)))
    .find(existsSync);
  if (onPath) return { executablePath: onPath, env: ownEnvironment(), args: ARGS, source: 'PATH' };
  const { chromium } = await import('playwright');
  if (existsSync(chromium.executablePath()))
    return { executablePath: chromium.executablePath(), env: ownEnvironment(), args: ARGS, source: 'playwright' };
  throw new Error('No Chromium: set CHROMIUM_PATH, install the system package "chromium", or run "npx playwright install chromium".');
}

/** Unpacks the browser of node_modules, with the libraries a bare system lacks, into a folder of this version and user. */
async function bundled(): Promise<Browser> {
  const folder = join(tmpdir(), `tillwater-chromium-${BUNDLED_VERSION}-${userInfo().uid}`);
  mkdirSync(folder, { recursive: true });
  const names = ['TMPDIR', 'AWS_EXECUTION_ENV', 'LD_LIBRARY_PATH', 'FONTCONFIG_PATH', 'HOME'] as const;
  const kept = Object.fromEntries(names.map((name) => [name, process.env[name]]));
  const env = ownEnvironment();
  // the package unpacks its system libraries only where it believes itself in that environment
  Object.assign(process.env, { TMPDIR: folder, AWS_EXECUTION_ENV: 'AWS_Lambda_nodejs20.x' });
  delete process.env.LD_LIBRARY_PATH;
  try {
    const { default: packaged } = await import('@sparticuz/chromium');
    const executablePath = await packaged.executablePath();
    return {
      executablePath,
      env: { ...env, LD_LIBRARY_PATH: join(folder, 'al2023/lib'), FONTCONFIG_PATH: join(folder, 'fonts') },
      args: ['--headless=shell', '--no-zygote', '--in-process-gpu', '--use-gl=angle', ...ARGS],
      source: '@sparticuz/chromium',
    };
  } finally {
    for (const name of names) {
      if (kept[name] === undefined) delete process.env[name];
      else process.env[name] = kept[name];
    }
  }
}
