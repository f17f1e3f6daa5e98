/** What a refusal of the API says, for a reader: its detail, and the rows or values at fault. */
export async function problemText(response: Response): Promise<string> {
  const fallback = `The request was refused (${response.status}). Try again; if it happens again, tell the district’s manager.`;
  try {
    const problem = (await response.json()) as { detail?: string; title?: string; findings?: { message: string }[] };
    const said = problem.detail ?? problem.title ?? fallback;
    return [said, ...(problem.findings ?? []).map((finding) => finding.message)].join(' ');
  } catch {
    return fallback;
  }
}

/** Sends JSON and answers the parsed body, or throws an error that says why not. */
export async function sendJson<Answer>(method: 'POST' | 'PATCH' | 'DELETE', address: string, body?: unknown): Promise<Answer | null> {
  const response = await fetch(address, {
    method,
    headers: body === undefined ? { accept: 'application/json' } : { accept: 'application/json', 'content-type': 'application/json' },
    body: body === undefined ? undefined : JSON.stringify(body),
  });
  if (!response.ok) throw new Error(await problemText(response));
  return response.status === 204 ? null : ((await response.json()) as Answer);
}

export function messageOf(error: unknown): string {
  return error instanceof Error ? error.message : 'The request did not arrive. Check the connection and try again.';
}
