/** What is refused before the pages and routes see it, over a real socket. Statuses and Allow: RFC 9110 sections 9 and 15.5; percent-encoding: RFC 3986 section 2.1. */
import { createServer, type Server } from 'node:http';
import { type AddressInfo, connect } from 'node:net';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { refuseEarly } from '../../lib/http/refuse-early.ts';

let server: Server;
beforeAll(async () => {
  server = createServer(async (request, response) => {
    if (!(await refuseEarly(request, response))) response.writeHead(299).end('let through');
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
});
afterAll(() => new Promise((resolve) => server.close(resolve)));

/** One request as it stands, and the answer as it came. */
function send(line: string): Promise<{ status: number; head: string; body: string }> {
  return new Promise((resolve, reject) => {
    let text = '';
    const socket = connect((server.address() as AddressInfo).port, '127.0.0.1');
    socket.on('data', (part) => {
      text += part;
    });
    socket.on('error', reject);
    socket.on('end', () => {
      const [head, body] = text.split('\r\n\r\n');
      resolve({ status: Number(head.split(' ')[1]), head: head.toLowerCase(), body });
    });
    socket.write(`${line} HTTP/1.1\r\nHost: localhost\r\nConnection: close\r\n\r\n`);
  });
}

describe('refuseEarly', () => {
  it.each([
    'GET /api/v1/parcels/%ff',
    'GET /parcels/%',
    'GET /parcels/%zz',
    'GET /parcels/a%00b',
    'GET /parcels?search=%00',
    'POST /api/v1/runs/%c3/cancel',
  ])('400 for %s', async (line) => {
    const { status, head, body } = await send(line);
    expect(status).toBe(400);
    expect(head).toContain('content-type: application/problem+json');
    expect(JSON.parse(body)).toMatchObject({ status: 400, type: '/api/docs#problem-malformed' });
  });

  it.each([
    ['TRACE /', 'get, head, post, put, patch, delete, options'],
    ['TRACE /api/v1/district', 'get, patch, head, options'],
    ['PROPFIND /parcels', 'get, head, post, put, patch, delete, options'],
    ['DELETE /api/v1/district', 'get, patch, head, options'],
    ['PUT /api/v1/seasons', 'get, post, head, options'],
    ['POST /api/v1/parcels.csv', 'get, head, options'],
    ['GET /api/v1/sign-in', 'post, options'],
    ['POST /api/v1/runs/abc/reports/summary.csv', 'get, head, options'],
  ])('405 for %s, with the methods it has', async (line, allow) => {
    const { status, head, body } = await send(line);
    expect(status).toBe(405);
    const allowed = /allow: (.*)/.exec(head)?.[1].trim().split(', ');
    expect(allowed?.sort()).toEqual(allow.split(', ').sort());
    expect(JSON.parse(body)).toMatchObject({ status: 405, type: '/api/docs#problem-wrong-method' });
  });

  it.each([
    'GET /',
    'GET /parcels/caf%C3%A9?search=%25',
    'GET /parcels/a%2500',
    'HEAD /api/v1/district',
    'OPTIONS /api/v1/runs',
    'GET /api/v1/nothing-here',
    'POST /api/auth/sign-out',
    'PATCH /api/v1/imports/x',
    'GET /api/v1/tiles/parcels/1/2/3/4.mvt',
  ])('lets %s through', async (line) => {
    expect((await send(line)).status).toBe(299);
  });
});
