/**
 * Works out what is written in a step of a working, as a reader with a pocket calculator would: numbers, + − · / ^ ( ), min and max. Text it cannot read
 * gives null.
 */
import { substituted } from '../../app/_components/substituted.ts';

interface Step {
  readonly expression: string;
  readonly inputs: readonly { readonly symbol: string; readonly value: number }[];
}

/** The value of a step's equation with its numbers put in, or null where it is told in words. */
export function workOut(step: Step): number | null {
  const exact = new Map<string, number>();
  const marked = step.inputs.map(({ symbol, value }, k) => {
    exact.set(`${900001 + k}`, value);
    return { symbol, value: 900001 + k };
  });
  const equation = step.expression.split(';')[0].split(/, (?=within|at least|at most|which|held|not below)/)[0];
  const text = substituted(equation, marked);
  if (text === null) return null;
  const plain = text.replace(/900,?\s?(\d{3})/g, '900$1');
  return evaluated(plain, exact);
}

function evaluated(text: string, exact: ReadonlyMap<string, number>): number | null {
  const tokens = text.match(/\d+(?:\.\d+)?|min|max|[-+−·/^()[\],]/g) ?? [];
  if (tokens.join('') !== text.replace(/\s/g, '')) return null;
  let at = 0;
  const take = () => tokens[at++];
  const sum = (): number => {
    let value = product();
    while (tokens[at] === '+' || tokens[at] === '−' || tokens[at] === '-') value = take() === '+' ? value + product() : value - product();
    return value;
  };
  const product = (): number => {
    let value = power();
    while (tokens[at] === '·' || tokens[at] === '/') value = take() === '·' ? value * power() : value / power();
    return value;
  };
  const power = (): number => {
    const base = single();
    if (tokens[at] !== '^') return base;
    take();
    return base ** single();
  };
  const single = (): number => {
    const token = take();
    if (token === '−' || token === '-') return -single();
    if (token === '(' || token === '[') {
      const value = sum();
      take();
      return value;
    }
    if (token === 'min' || token === 'max') {
      take();
      const values = [sum()];
      while (tokens[at] === ',') {
        take();
        values.push(sum());
      }
      take();
      return token === 'min' ? Math.min(...values) : Math.max(...values);
    }
    return exact.get(token) ?? Number(token);
  };
  const value = sum();
  return at === tokens.length && Number.isFinite(value) ? value : null;
}
