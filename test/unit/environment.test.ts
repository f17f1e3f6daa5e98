import { describe, expect, it } from 'vitest';
import { readEnvironment } from '../../lib/access/environment.ts';

describe('readEnvironment', () => {
  it('takes an empty value for one that is not given', () => {
    expect(readEnvironment({ PORT: '', HOST: '' })).toMatchObject({ PORT: 3000, HOST: '127.0.0.1', TILLWATER_EMPTY: false });
  });

  it.each([
    ['1', true],
    ['true', true],
    ['0', false],
    ['false', false],
  ])('reads the flag %s', (text, expected) => {
    expect(readEnvironment({ TILLWATER_EMPTY: text }).TILLWATER_EMPTY).toBe(expected);
  });

  it('leaves variables of others alone', () => {
    expect(Object.keys(readEnvironment({ HOME: '/root', PORT: '8080' }))).not.toContain('HOME');
  });

  it.each([
    [{ DATABASE_URL: 'mysql://localhost/x' }, 'DATABASE_URL'],
    [{ PORT: '70000' }, 'PORT'],
    [{ PORT: 'http' }, 'PORT'],
    [{ TILLWATER_SECRET: 'too short' }, 'TILLWATER_SECRET'],
    [{ TILLWATER_DEMO_TOKEN: 'short' }, 'TILLWATER_DEMO_TOKEN'],
    [{ TILLWATER_EMPTY: 'maybe' }, 'TILLWATER_EMPTY'],
    [{ TILLWATER_WORKERS: '-1' }, 'TILLWATER_WORKERS'],
    [{ LOG_LEVEL: 'loud' }, 'LOG_LEVEL'],
  ])('names what is at fault in %o', (given, name) => {
    expect(() => readEnvironment(given)).toThrow(new RegExp(`${name}: `));
  });

  it('names every fault at once', () => {
    expect(() => readEnvironment({ PORT: 'x', LOG_LEVEL: 'y' })).toThrow(/PORT[\s\S]*LOG_LEVEL/);
  });
});
