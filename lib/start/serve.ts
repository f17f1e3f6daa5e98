/** The web process: Next behind a small HTTP server that sets the security headers and stops gracefully. */
import { randomBytes } from 'node:crypto';
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import next from 'next';
import { closeDatabase } from '../access/database.ts';
import { environment } from '../access/environment.ts';
import { log } from '../access/log.ts';
import { refuseEarly } from '../http/refuse-early.ts';
import { closeStreams } from '../http/streams.ts';
import { stopQueue } from '../jobs/queue.ts';
import { sayReady, stopWithParent } from './children.ts';

const { HOST, PORT, NODE_ENV } = environment();
const dev = NODE_ENV === 'development';
const app = next({ dev, dir: process.cwd(), hostname: HOST, port: PORT });
await app.prepare();
const handle = app.getRequestHandler();

/**
 * Content security policy of one request. Scripts carry the nonce; nothing outside the service is ever loaded.
 * Development needs eval for hot reload.
 */
function contentSecurityPolicy(nonce: string): string {
  const scripts = dev ? "'self' 'unsafe-eval' 'unsafe-inline'" : `'self' 'nonce-${nonce}' 'strict-dynamic'`;
  const styles = dev ? "'self' 'unsafe-inline'" : `'self' 'nonce-${nonce}'`;
  return [
    "default-src 'self'",
    `script-src ${scripts}`,
    `style-src ${styles}`,
    "style-src-attr 'unsafe-inline'",
    "img-src 'self' blob: data:",
    "worker-src 'self'",
    "connect-src 'self'",
    "font-src 'self'",
    "object-src 'none'",
    "base-uri 'none'",
    "form-action 'self'",
    "frame-ancestors 'none'",
  ].join('; ');
}

function secured(request: IncomingMessage, response: ServerResponse): void {
  const nonce = randomBytes(16).toString('base64');
  const policy = contentSecurityPolicy(nonce);
  // Next reads the nonce for its own scripts from the request's header
  request.headers['content-security-policy'] = policy;
  request.headers['x-nonce'] = nonce;
  response.setHeader('content-security-policy', policy);
  response.setHeader('x-content-type-options', 'nosniff');
  response.setHeader('referrer-policy', 'same-origin');
  response.setHeader('cross-origin-opener-policy', 'same-origin');
}

async function serve(request: IncomingMessage, response: ServerResponse): Promise<void> {
  if (!(await refuseEarly(request, response))) await handle(request, response);
}

const server = createServer((request, response) => {
  secured(request, response);
  serve(request, response).catch((error) => {
    log().error({ err: error, url: request.url }, 'request failed');
    if (!response.headersSent) response.writeHead(500).end();
  });
});
// a large upload on a slow line may take long; an idle or stalled connection may not
server.requestTimeout = 15 * 60_000;
server.headersTimeout = 30_000;
// longer than a reverse proxy or a client commonly keeps an idle connection (60 s): whoever closes first, it should not be us in the middle of a request
server.keepAliveTimeout = 75_000;

server.listen(PORT, HOST, () => {
  log().info({ host: HOST, port: PORT }, 'serving');
  sayReady();
});

stopWithParent(async () => {
  const closed = new Promise<void>((resolve) => server.close(() => resolve()));
  closeStreams();
  server.closeIdleConnections();
  setTimeout(() => server.closeAllConnections(), 4000).unref();
  await closed;
  await stopQueue(1000);
  await closeDatabase();
});
