import { notFound } from 'next/navigation';
import { NotFound } from '../../lib/base/errors.ts';

/** An answer, or the page that says there is no such thing. */
export async function orNotFound<Answer>(answer: Promise<Answer>): Promise<Answer> {
  try {
    return await answer;
  } catch (error) {
    if (error instanceof NotFound) notFound();
    throw error;
  }
}
