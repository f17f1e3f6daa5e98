/** Problem details: RFC 9457 sections 3 and 4; Retry-After: RFC 9110 section 10.2.3. */

import { beforeAll, describe, expect, it } from 'vitest';
import { z } from 'zod';
import { rereadEnvironment } from '../../lib/access/environment.ts';
import {
  Conflict,
  Forbidden,
  Malformed,
  NotFound,
  Refused,
  ShapeError,
  TooLarge,
  TooMany,
  Unauthenticated,
  UnknownKind,
} from '../../lib/base/errors.ts';
import { problemResponse } from '../../lib/http/problem.ts';

const request = new Request('http://localhost/api/v1/runs');
beforeAll(() => {
  process.env.LOG_LEVEL = 'silent';
  rereadEnvironment();
});

describe('problemResponse', () => {
  it.each([
    [new Malformed('m'), 400, 'malformed'],
    [new Unauthenticated('m'), 401, 'unauthenticated'],
    [new Forbidden('m'), 403, 'forbidden'],
    [new NotFound('m'), 404, 'not-found'],
    [new Conflict('m'), 409, 'conflict'],
    [new TooLarge('m'), 413, 'too-large'],
    [new UnknownKind('m'), 415, 'unknown-kind'],
    [new Refused('m'), 422, 'refused'],
    [new TooMany('m', 7), 429, 'too-many'],
  ])('%o becomes %i', async (error, status, code) => {
    const response = problemResponse(error, request);
    expect(response.status).toBe(status);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
    const body = await response.json();
    expect(body).toMatchObject({ status, detail: 'm', type: `/api/docs#problem-${code}` });
    expect(typeof body.title).toBe('string');
  });

  it('says when to come back, and how to sign in', () => {
    expect(problemResponse(new TooMany('m', 7), request).headers.get('retry-after')).toBe('7');
    expect(problemResponse(new Unauthenticated('m'), request).headers.get('www-authenticate')).toBe('Bearer');
  });

  it('passes findings on', async () => {
    const finding = {
      severity: 'error',
      code: 'value-out-of-range',
      message: 'm',
      row: 3,
      column: 'tmax',
      value: '99',
      limit: '60 °C',
      advice: 'a',
    } as const;
    expect((await problemResponse(new Refused('m', [finding]), request).json()).findings).toEqual([finding]);
  });

  it('names the members that a schema refused', async () => {
    const { error } = z.object({ a: z.object({ b: z.number() }), c: z.string() }).safeParse({ a: { b: 'x' } });
    const body = await problemResponse(error, request).json();
    expect(body.status).toBe(400);
    expect(body.findings.map((finding: { column: string }) => finding.column)).toEqual(['a.b', 'c']);
  });

  it.each([[new Error('secret of the inside')], [new ShapeError('secret of the inside')], ['secret of the inside'], [undefined]])(
    'a failure of ours is a 500 with an id and nothing from the inside: %o',
    async (error) => {
      const response = problemResponse(error, request);
      expect(response.status).toBe(500);
      const text = await response.text();
      expect(text).not.toMatch(/secret of the inside|problem\.test/);
      expect(JSON.parse(text).instance).toMatch(/^urn:uuid:[0-9a-f-]{36}$/);
    },
  );
});
