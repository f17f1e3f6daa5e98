import { handleAuthRequest } from '../../../../lib/access/sessions.ts';

export const GET = (request: Request) => handleAuthRequest(request);
export const POST = (request: Request) => handleAuthRequest(request);
