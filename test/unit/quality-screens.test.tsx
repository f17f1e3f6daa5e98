/** What the address of the quality desk asks for. */
import { describe, expect, it } from 'vitest';
import { filterAsked, PAGE_FLAGS, pageAsked } from '../../app/(desk)/weather/desk/quality/flag-filter.tsx';
import { flagHref } from '../../app/(desk)/weather/desk/quality/flag-table.tsx';
import type { FlagAnswer } from '../../lib/http/contract/quality.ts';
import { writeCursor } from '../../lib/http/paging.ts';

describe('the list of flags', () => {
  it('shows open ones unless the address says otherwise', () => {
    expect(filterAsked({})).toMatchObject({ state: 'open', severity: undefined, rule: undefined, from: undefined });
    expect(filterAsked({ state: 'any', severity: 'suspect', rule: 'spike' })).toMatchObject({
      state: undefined,
      severity: 'suspect',
      rule: 'spike',
    });
  });

  it('passes over what is no rule, no day and no cursor, and turns days round that are out of order', () => {
    expect(filterAsked({ rule: 'nonsense', variable: 'x', from: 'yesterday', state: 'lost' })).toMatchObject({
      ...{ rule: undefined, variable: undefined, from: undefined, state: 'open' },
    });
    expect(filterAsked({ from: '2024-05-02', to: '2024-05-01' })).toMatchObject({ from: '2024-05-01', to: '2024-05-02' });
    expect(pageAsked({ cursor: 'nonsense' })).toEqual({ limit: PAGE_FLAGS });
    expect(pageAsked({ cursor: writeCursor(100) })).toEqual({ limit: PAGE_FLAGS, cursor: writeCursor(100) });
  });

  it('leads to the page of a flag by everything that names it', () => {
    const flag = {
      source: 'north & south',
      site: 'A/1',
      variable: 'wind_speed_m_s',
      rule: 'wind-still',
      first_day: '2024-04-01',
    } as FlagAnswer;
    const asked = new URL(flagHref(flag), 'http://localhost').searchParams;
    expect(Object.fromEntries(asked)).toEqual({
      source: 'north & south',
      site: 'A/1',
      variable: 'wind_speed_m_s',
      rule: 'wind-still',
      first_day: '2024-04-01',
    });
  });
});
