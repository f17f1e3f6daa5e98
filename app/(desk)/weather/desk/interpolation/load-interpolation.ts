import type { Caller } from '../../../../../lib/access/caller.ts';
import { TillwaterError } from '../../../../../lib/base/errors.ts';
import { answerInterpolation } from '../../../../../lib/http/answers/interpolation.ts';
import {
  CARRIED_NAMES,
  type CarriedVariable,
  type CarriedVariableAnswer,
  type InterpolationAnswer,
} from '../../../../../lib/http/contract/interpolation.ts';
import { hrefWith, one, oneOf, type Query } from '../../../../_components/query.ts';

export const INTERPOLATION_PATH = '/weather/desk/interpolation';

interface Loaded {
  readonly check: InterpolationAnswer;
  readonly shown: CarriedVariableAnswer;
  /** address of the whole table as CSV */
  readonly csv: string;
}

/** The figures of the days the address asks for, else of the season in view; a refusal in words where there are none. */
export async function loadInterpolation(
  caller: Caller,
  query: Query,
  season: string | undefined,
): Promise<Loaded | { readonly refusal: string }> {
  const variable = oneOf<CarriedVariable>(query, 'variable', CARRIED_NAMES, 'reference_et_mm');
  const [source, from, to] = ['source', 'from', 'to'].map((key) => one(query, key));
  const days = from || to ? { from, to } : { season };
  const asked = { source, ...days, method: one(query, 'method') };
  try {
    const check = await answerInterpolation(caller, asked);
    const shown = check.items.find((item) => item.variable === variable);
    if (!shown) return { refusal: 'No station could be held against another on these days.' };
    const csv = hrefWith('/api/v1/weather/interpolation.csv', {}, { from: check.from, to: check.to, source: source ?? null });
    return { check, shown, csv };
  } catch (error) {
    if (error instanceof TillwaterError) return { refusal: error.message };
    throw error;
  }
}
