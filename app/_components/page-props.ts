import type { Query } from './query.ts';

/** What the router hands to a page. */
export interface PageProps<Params extends string = never> {
  readonly params: Promise<Readonly<Record<Params, string>>>;
  readonly searchParams: Promise<Query>;
}

/** A part of the address as it was before it was written into the address. */
export function decoded(part: string): string {
  try {
    return decodeURIComponent(part);
  } catch {
    return part;
  }
}
