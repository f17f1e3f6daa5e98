interface Problem {
  readonly detail?: string;
  readonly title?: string;
  readonly findings?: readonly { readonly message: string; readonly column?: string }[];
}

/** A refusal of the API: what it says, and for each member of the request at fault why. */
export class Refusal extends Error {
  constructor(
    message: string,
    /** member of the request, as `manager.email`, to what is wrong with it */
    readonly faults: Readonly<Record<string, string>> = {},
    readonly status = 0,
  ) {
    super(message);
  }
}

/** The refusal in a response; an answer that is no problem document is refused in general words. */
export async function refusalOf(response: Response): Promise<Refusal> {
  const fallback = `The request was refused (${response.status}). Try again; if it happens again, tell the district’s manager.`;
  try {
    const problem = (await response.json()) as Problem;
    const findings = problem.findings ?? [];
    const said = problem.detail ?? problem.title ?? fallback;
    const faults = Object.fromEntries(findings.flatMap(({ column, message }) => (column ? [[column, message]] : [])));
    // findings repeated in the detail are not said twice
    const more = findings.map((finding) => finding.message).filter((message) => !said.includes(message));
    return new Refusal([said, ...more].join(' '), faults, response.status);
  } catch {
    return new Refusal(fallback, {}, response.status);
  }
}

/** What a refusal of the API says, for a reader: its detail, and the rows or values at fault. */
export async function problemText(response: Response): Promise<string> {
  return (await refusalOf(response)).message;
}

/** Sends JSON and answers the parsed body, or throws a refusal that says why not. */
export async function sendJson<Answer>(
  method: 'POST' | 'PATCH' | 'DELETE',
  address: string,
  body?: unknown,
  headers: Readonly<Record<string, string>> = {},
): Promise<Answer | null> {
  const response = await fetch(address, {
    method,
    headers: { accept: 'application/json', ...(body === undefined ? {} : { 'content-type': 'application/json' }), ...headers },
    body: body === undefined ? undefined : JSON.stringify(body),
  });
  if (!response.ok) throw await refusalOf(response);
  return response.status === 204 ? null : ((await response.json()) as Answer);
}

/** Why something failed, for a reader. A request that never arrived says so: browsers name that fault each in their own words. */
export function messageOf(error: unknown): string {
  if (error instanceof Error && !(error instanceof TypeError)) return error.message;
  return 'The request did not arrive. Check the connection and try again.';
}

/** Which members of the request are at fault, and why; none when the refusal names none. */
export function faultsOf(error: unknown): Readonly<Record<string, string>> {
  return error instanceof Refusal ? error.faults : {};
}

/** What a form says beside its fields: where fields are marked, no more than that. */
export function formMessageOf(error: unknown): string {
  if (Object.keys(faultsOf(error)).length > 0) return 'Nothing was saved: see what is marked above.';
  const text = messageOf(error);
  return text.charAt(0).toUpperCase() + text.slice(1);
}
