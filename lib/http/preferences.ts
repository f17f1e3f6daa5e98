/** What a reader prefers, kept in cookies of the browser. */
import { callerOfRequest, PREFERENCE_COOKIES } from '../access/caller.ts';
import { isSecure } from '../access/sessions.ts';
import { NotFound } from '../base/errors.ts';
import { answerDistricts } from './answers/district.ts';
import { preferenceCookie } from './cookies.ts';

interface Preferences {
  readonly units?: 'metric' | 'us';
  /** code or id of a district the reader belongs to */
  readonly district?: string;
  readonly theme?: 'light' | 'dark' | 'system';
}

/** Cookies that remember the given preferences. @throws {NotFound} for a district the reader does not belong to. */
export async function preferenceCookies(request: Request, wanted: Preferences): Promise<string[]> {
  const secure = isSecure(request.headers);
  const cookies: string[] = [];
  if (wanted.units) cookies.push(preferenceCookie(PREFERENCE_COOKIES.units, wanted.units, secure));
  if (wanted.theme) cookies.push(preferenceCookie(PREFERENCE_COOKIES.theme, wanted.theme === 'system' ? '' : wanted.theme, secure));
  if (wanted.district) cookies.push(preferenceCookie(PREFERENCE_COOKIES.district, await districtCode(request, wanted.district), secure));
  return cookies;
}

async function districtCode(request: Request, wanted: string): Promise<string> {
  const districts = await answerDistricts(await callerOfRequest(request));
  const found = districts.find((district) => district.code === wanted || district.id === wanted);
  if (!found) throw new NotFound(`you belong to no district "${wanted}"`);
  return found.code;
}
