/** The process is alive. */
export const dynamic = 'force-dynamic';

export const GET = () => Response.json({ state: 'alive' });
