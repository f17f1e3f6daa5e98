import { metricsResponse } from '../../lib/http/metrics-access.ts';

export const dynamic = 'force-dynamic';

/** Prometheus text, for this machine or a token that administers. */
export const GET = (request: Request) => metricsResponse(request);
