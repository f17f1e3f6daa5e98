import type { UnitSystem } from '../../../../lib/base/units.ts';
import { BUDGET_METHODS, type SiteBudget } from '../../../../lib/http/answers/weather-hours.ts';
import type { SiteDay } from '../../../../lib/http/contract/rest.ts';
import { FiguresBelow } from '../../../_components/data-table.tsx';
import { BudgetTable, EnergyBars } from '../../../_components/energy-bars.tsx';
import { FallbackWords } from '../../../_components/fallback-words.tsx';
import { figureWithUnit } from '../../../_components/figures.ts';
import { Go } from '../../../_components/go.tsx';
import { HourBudget } from '../../../_components/hour-budget.tsx';
import { Section } from '../../../_components/page-head.tsx';
import { hrefWith } from '../../../_components/query.ts';
import { StepGroups } from '../../../_components/working-steps.tsx';
import type { DayRange } from '../load-site-series.ts';

interface DayBudgetProps {
  readonly budget: SiteBudget;
  readonly day: SiteDay;
  readonly path: string;
  readonly range: DayRange;
  readonly source: string;
  readonly units: UnitSystem;
}

/** The energy budget of one day: chart, table, hours and the working behind them. */
export function DayBudget(props: DayBudgetProps) {
  const { budget, day, units } = props;
  return (
    <>
      <Section id="budget" title="Energy budget of a day" actions={<DayChoice {...props} />}>
        <EnergyBars budget={budget} />
        <BudgetTable budget={budget} />
        <p>
          Reference ET {figureWithUnit(budget.reference_et_mm, 'depth', units)} from the day as a whole
          {budget.reference_et_hourly_mm === null
            ? ''
            : `, ${figureWithUnit(budget.reference_et_hourly_mm, 'depth', units)} as the sum of its hours`}
          {day.reference_et_given_mm === null
            ? ''
            : `, ${figureWithUnit(day.reference_et_given_mm, 'depth', units)} as the source gives it`}
          .
        </p>
        <FallbackWords names={day.fallbacks} />
        {budget.hours ? <HourBudget answer={budget.hours} units={units} /> : null}
      </Section>
      {budget.steps.length > 0 ? (
        <FiguresBelow summary="Working of this budget: every equation with its numbers" printed>
          <StepGroups steps={budget.steps} />
        </FiguresBelow>
      ) : null}
    </>
  );
}

/** Day before and after, any day, and the equation. */
function DayChoice({ budget, path, range, source }: DayBudgetProps) {
  const kept = { from: range.from, to: range.to, source, method: budget.method.id };
  const dayLink = (date: string | null, label: string) =>
    date && date >= range.from && date <= range.to ? (
      <Go className="button" href={`${hrefWith(path, {}, { ...kept, day: date })}#budget`}>
        {label}
      </Go>
    ) : null;
  return (
    <div className="row no-print">
      {dayLink(budget.previous, 'Day before')}
      <form action={`${path}#budget`} className="row">
        <input type="hidden" name="from" value={range.from} />
        <input type="hidden" name="to" value={range.to} />
        <input type="hidden" name="source" value={source} />
        <label className="row">
          <span className="label">Day</span>
          <input type="date" name="day" defaultValue={budget.date} min={range.from} max={range.to} />
        </label>
        <label className="row">
          <span className="label">Equation</span>
          <select name="method" defaultValue={budget.method.id}>
            {BUDGET_METHODS.map(({ id, name }) => (
              <option key={id} value={id}>
                {name}
              </option>
            ))}
          </select>
        </label>
        <button type="submit" className="button">
          Show
        </button>
      </form>
      {dayLink(budget.next, 'Day after')}
    </div>
  );
}
