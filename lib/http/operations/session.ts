import { z } from 'zod';
import { operation } from '../operation.ts';

const tag = 'Signing in';

export const signInOperation = operation({
  method: 'POST',
  path: '/api/v1/sign-in',
  tag,
  summary: 'Sign in',
  description: 'Sets the session cookie. At most 10 tries in a minute for one e-mail address. Scripts use a token instead.',
  scope: 'open',
  body: z.strictObject({ email: z.string().min(3).max(254), password: z.string().min(1).max(200) }).meta({ id: 'SignIn' }),
  status: 204,
  refusals: [413, 415],
});

export const signOutOperation = operation({
  method: 'POST',
  path: '/api/v1/sign-out',
  tag,
  summary: 'Sign out',
  description: 'Ends the session and removes its cookie.',
  scope: 'open',
  status: 204,
});

export const preferencesOperation = operation({
  method: 'POST',
  path: '/api/v1/preferences',
  tag,
  summary: 'Remember units, district or theme for this browser',
  description: 'Sets cookies. `district` is the code of a district the reader belongs to.',
  scope: 'open',
  body: z
    .strictObject({
      units: z.enum(['metric', 'us']).optional(),
      district: z.string().max(60).optional(),
      theme: z.enum(['light', 'dark', 'system']).optional(),
    })
    .meta({ id: 'Preferences' }),
  status: 204,
  refusals: [404, 413, 415],
});
