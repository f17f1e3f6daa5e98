/** Cookies on an answer that has nothing else to say. */
export function noContent(cookies: readonly string[]): Response {
  const headers = new Headers({ 'cache-control': 'no-store' });
  for (const cookie of cookies) headers.append('set-cookie', cookie);
  return new Response(null, { status: 204, headers });
}

/** A cookie that outlives the session; pages read it on the server, so scripts need not. */
export function preferenceCookie(name: string, value: string, secure: boolean): string {
  return `${name}=${encodeURIComponent(value)}; Path=/; Max-Age=31536000; SameSite=Lax; HttpOnly${secure ? '; Secure' : ''}`;
}
