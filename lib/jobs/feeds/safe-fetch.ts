/**
 * Fetching an address that a user gave, from inside the service's own network: only public addresses are asked, whatever a name resolves to
 * and wherever a redirect leads, unless whoever runs the service has named the host (TILLWATER_FEED_HOSTS).
 */
import { lookup as resolve } from 'node:dns';
import { request as httpRequest, type IncomingMessage } from 'node:http';
import { request as httpsRequest } from 'node:https';
import { isIP, type LookupFunction } from 'node:net';
import ipaddr from 'ipaddr.js';
import { environment } from '../../access/environment.ts';
import { Refused } from '../../base/errors.ts';
import { streamToFile, type WrittenFile } from '../stream-to-file.ts';

export interface Fetched {
  readonly status: number;
  /** null when nothing new came */
  readonly file: WrittenFile | null;
  readonly etag: string | null;
  readonly lastModified: string | null;
  /** seconds the server asked to wait */
  readonly retryAfter: number | null;
}

interface Asking {
  /** where the body goes */
  readonly path: string;
  /** most bytes taken */
  readonly limit: number;
  readonly etag: string | null;
  readonly lastModified: string | null;
  readonly signal: AbortSignal;
}

const REDIRECTS = 5;
const IDLE_MS = 30_000;

/**
 * Gets an address into a file, if it has changed.
 *
 * @throws Refused for an address that may not be asked, or a body above the limit; the network's own errors
 */
export async function fetchTo(address: string, asking: Asking): Promise<Fetched> {
  let current = checkAddress(address);
  for (let step = 0; step <= REDIRECTS; step++) {
    const response = await ask(current, asking);
    const target = response.headers.location;
    if (
      response.statusCode === undefined ||
      response.statusCode < 300 ||
      response.statusCode >= 400 ||
      response.statusCode === 304 ||
      !target
    ) {
      return take(response, asking);
    }
    response.resume();
    const next = checkAddress(new URL(target, current).href);
    if (current.protocol === 'https:' && next.protocol === 'http:')
      throw new Refused(`${current.href} leads from https to http (${next.href}): give the address it should be.`);
    current = next;
  }
  throw new Refused(`${address} leads on more than ${REDIRECTS} times: give the address the file itself has.`);
}

/** @throws Refused for what is not http(s), carries a password, or names a host inside private ranges */
export function checkAddress(address: string): URL {
  let url: URL;
  try {
    url = new URL(address);
  } catch {
    throw new Refused(`"${address}" is not an address: give one that begins with https://.`);
  }
  if (url.protocol !== 'https:' && url.protocol !== 'http:')
    throw new Refused(`"${address}" is ${url.protocol}//: only https and http are asked.`);
  if (url.username || url.password) throw new Refused('The address carries a name or password: leave it out; feeds are asked without one.');
  const host = bareHost(url);
  if (isIP(host) ? !isAllowed(host, host) : LOCAL_NAMES.test(host) && !isNamed(host)) throw privateHost(host);
  return url;
}

/** Names that never lead to a public address. Source: RFC 6761, RFC 6762 and RFC 8375 (recalled). */
const LOCAL_NAMES = /(^|\.)(localhost|local|internal|home\.arpa)$/i;

function isNamed(host: string): boolean {
  return environment().TILLWATER_FEED_HOSTS.some((entry) => entry.toLowerCase() === host.toLowerCase());
}

function bareHost(url: URL): string {
  return url.hostname.replace(/^\[|\]$/g, '');
}

function privateHost(host: string): Refused {
  return new Refused(
    `${host} is not a public address. Whoever runs this service may allow it by naming it in TILLWATER_FEED_HOSTS; nothing else inside the service's network is asked.`,
  );
}

/** True for public unicast addresses, and for what the service's configuration names by host or range. */
export function isAllowed(host: string, resolved: string): boolean {
  const parsed = ipaddr.process(resolved);
  if (environment().TILLWATER_FEED_HOSTS.some((entry) => namesHost(entry, host, parsed))) return true;
  return parsed.range() === 'unicast';
}

function namesHost(entry: string, host: string, address: ipaddr.IPv4 | ipaddr.IPv6): boolean {
  if (entry.toLowerCase() === host.toLowerCase()) return true;
  if (!ipaddr.isValid(entry) && !ipaddr.isValidCIDR(entry)) return false;
  const [range, bits] = ipaddr.isValidCIDR(entry) ? ipaddr.parseCIDR(entry) : [ipaddr.process(entry), -1];
  if (range.kind() !== address.kind()) return false;
  return bits < 0 ? range.toString() === address.toString() : address.match(range as never, bits);
}

/** Resolves a name and hands out only addresses that may be asked: the connection is made to one of these and no other. */
export const guardedLookup: LookupFunction = (host, options, done) => {
  resolve(host, { ...options, all: true }, (error, addresses) => {
    if (error) return done(error, '');
    const allowed = addresses.filter(({ address }) => isAllowed(host, address));
    if (allowed.length === 0) return done(privateHost(host), '');
    if (options.all) return done(null, allowed as never);
    done(null, allowed[0].address, allowed[0].family);
  });
};

function ask(url: URL, { etag, lastModified, signal }: Asking): Promise<IncomingMessage> {
  const headers: Record<string, string> = { 'user-agent': 'Tillwater feed', 'accept-encoding': 'identity' };
  if (etag) headers['if-none-match'] = etag;
  if (lastModified) headers['if-modified-since'] = lastModified;
  const send = url.protocol === 'https:' ? httpsRequest : httpRequest;
  return new Promise((done, fail) => {
    const request = send(url, { headers, lookup: guardedLookup, signal, timeout: IDLE_MS }, done);
    request.on('timeout', () => request.destroy(new Error(`${url.host} did not answer within ${IDLE_MS / 1000} s`)));
    request.on('error', fail);
    request.end();
  });
}

async function take(response: IncomingMessage, { path, limit, signal }: Asking): Promise<Fetched> {
  const told = {
    status: response.statusCode ?? 0,
    etag: response.headers.etag ?? null,
    lastModified: response.headers['last-modified'] ?? null,
    retryAfter: secondsOf(response.headers['retry-after']),
  };
  if (told.status !== 200) {
    response.resume();
    return { ...told, file: null };
  }
  if (Number(response.headers['content-length'] ?? 0) > limit) {
    response.destroy();
    throw tooLarge(limit);
  }
  const file = await streamToFile(response, path, { refuse: (size) => (size > limit ? tooLarge(limit) : null), signal });
  return { ...told, file };
}

function tooLarge(limit: number): Refused {
  return new Refused(
    `The file is larger than ${Math.round(limit / 1024 / 1024)} MB, the most this service takes (TILLWATER_UPLOAD_LIMIT_MB).`,
  );
}

function secondsOf(header: string | undefined): number | null {
  if (!header) return null;
  const seconds = Number(header);
  if (Number.isFinite(seconds)) return Math.max(0, seconds);
  const at = Date.parse(header);
  return Number.isNaN(at) ? null : Math.max(0, (at - Date.now()) / 1000);
}
