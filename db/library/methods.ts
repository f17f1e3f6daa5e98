/**
 * Application methods every district starts with. Efficiencies are indicative: a district that has measured its own should enter those.
 */
import type { ApplicationMethod } from '../../lib/season/types.ts';

interface LibraryMethod extends ApplicationMethod {
  readonly source: string;
}

const WETTED = 'wetted fraction FAO-56 Table 20, middle of the printed range';
const HABIT = 'daily depth and trigger common practice, no source';
const MANUAL_4 = 'efficiency FAO Irrigation Water Management Training Manual 4 (recalled, not re-read)';
const HOWELL = 'efficiency Howell (2003) (recalled, not re-read)';

export const LIBRARY_METHODS: readonly LibraryMethod[] = [
  {
    code: 'furrow',
    name: 'Furrow',
    efficiency: 0.6,
    wettedFraction: 0.8,
    underCanopy: false,
    maximumDailyDepth: 60,
    triggerFraction: 1,
    source: `${MANUAL_4}, surface; ${WETTED}, narrow bed; ${HABIT}`,
  },
  {
    code: 'border',
    name: 'Graded border',
    efficiency: 0.65,
    wettedFraction: 1,
    underCanopy: false,
    maximumDailyDepth: 80,
    triggerFraction: 1,
    source: `${HOWELL}, middle of 50–80 % for graded border; ${WETTED}; ${HABIT}`,
  },
  {
    code: 'basin',
    name: 'Level basin',
    efficiency: 0.8,
    wettedFraction: 1,
    underCanopy: false,
    maximumDailyDepth: 80,
    triggerFraction: 1,
    source: `${HOWELL}, low end of 80–95 % for level basin; ${WETTED}; ${HABIT}`,
  },
  {
    code: 'set-sprinkler',
    name: 'Set-move sprinkler',
    efficiency: 0.75,
    wettedFraction: 1,
    underCanopy: false,
    maximumDailyDepth: 40,
    triggerFraction: 0.9,
    source: `${MANUAL_4}, sprinkler; ${WETTED}; ${HABIT}`,
  },
  {
    code: 'pivot',
    name: 'Centre pivot',
    efficiency: 0.85,
    wettedFraction: 1,
    underCanopy: false,
    maximumDailyDepth: 12,
    triggerFraction: 0.5,
    source: `${HOWELL}, pivot with impact heads; ${WETTED}; ${HABIT}`,
  },
  {
    code: 'drip',
    name: 'Drip',
    efficiency: 0.9,
    wettedFraction: 0.35,
    underCanopy: true,
    maximumDailyDepth: 10,
    triggerFraction: 0.3,
    source: `${MANUAL_4}, drip; ${WETTED}, trickle; ${HABIT}`,
  },
  {
    code: 'subsurface-drip',
    name: 'Subsurface drip',
    efficiency: 0.95,
    wettedFraction: 0.1,
    underCanopy: true,
    maximumDailyDepth: 10,
    triggerFraction: 0.3,
    source: `${HOWELL}, drip; wetted fraction 0.1 common practice for buried lines, no source; ${HABIT}`,
  },
];
