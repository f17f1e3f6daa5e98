/**
 * The two database roles: the owner, who migrates, and the application's role, which may read and write rows but owns nothing and is
 * held by row-level security. The application's password is derived from the owner's, so that every host given the same DATABASE_URL
 * can log in without another secret being carried about.
 */
import { createHmac } from 'node:crypto';

export const APP_ROLE = 'tillwater_web';

/** Password of the application's role for a server reached with `ownerUrl`. */
export function appRolePassword(ownerUrl: string): string {
  return createHmac('sha256', decodeURIComponent(new URL(ownerUrl).password) || 'no password')
    .update(APP_ROLE)
    .digest('base64url');
}

/** Address of the application's role on the same server and database. */
export function appRoleUrl(ownerUrl: string): string {
  const url = new URL(ownerUrl);
  url.username = APP_ROLE;
  url.password = appRolePassword(ownerUrl);
  return url.toString();
}
