import { periodName } from './date-words.ts';
import { Go } from './go.tsx';
import { Icon } from './icon.tsx';
import { PERIOD_KINDS, type PeriodChoice } from './period-choice.ts';
import styles from './period-picker.module.css';
import { hrefWith, one, type Query } from './query.ts';

const NAMES = { week: 'Week', month: 'Month', season: 'Season' } as const;

/** Week, month or season, and which one. Works as links and a plain form, without script. */
export function PeriodPicker({ path, query, choice }: { path: string; query: Query; choice: PeriodChoice }) {
  const at = (index: number) => hrefWith(path, query, { period: choice.kind, date: choice.periods[index].start, page: null });
  return (
    <div className={styles.picker}>
      <nav className={styles.kinds} aria-label="Length of the period">
        {PERIOD_KINDS.map((kind) => (
          <Go
            key={kind}
            href={hrefWith(path, query, {
              period: kind,
              date: choice.kind === 'season' ? (one(query, 'date') ?? null) : choice.period.start,
              page: null,
            })}
            aria-current={kind === choice.kind ? 'true' : undefined}
          >
            {NAMES[kind]}
          </Go>
        ))}
      </nav>
      {choice.kind === 'season' ? (
        <span className={styles.span}>{periodName('season', choice.period)}</span>
      ) : (
        <div className={styles.which}>
          <Step href={choice.index > 0 ? at(choice.index - 1) : null} label={`Earlier ${choice.kind}`} sign="back" />
          <PeriodForm path={path} query={query} choice={choice} />
          <Step
            href={choice.index < choice.periods.length - 1 ? at(choice.index + 1) : null}
            label={`Later ${choice.kind}`}
            sign="forward"
          />
        </div>
      )}
    </div>
  );
}

function Step({ href, label, sign }: { href: string | null; label: string; sign: 'back' | 'forward' }) {
  if (!href) return null;
  return (
    <Go className="button" href={href} aria-label={label} title={label}>
      <Icon name={sign} />
    </Go>
  );
}

function PeriodForm({ path, query, choice }: { path: string; query: Query; choice: PeriodChoice }) {
  const kept = Object.keys(query).filter((key) => !['period', 'date', 'page'].includes(key) && one(query, key));
  return (
    <form action={path} className={styles.form}>
      {kept.map((key) => (
        <input key={key} type="hidden" name={key} value={one(query, key)} />
      ))}
      <input type="hidden" name="period" value={choice.kind} />
      <label>
        <span className="visually-hidden">{NAMES[choice.kind]}</span>
        <select name="date" key={choice.period.start} defaultValue={choice.period.start}>
          {choice.periods.map((period) => (
            <option key={period.start} value={period.start}>
              {periodName(choice.kind, period)}
            </option>
          ))}
        </select>
      </label>
      <button type="submit" className="button">
        Show
      </button>
    </form>
  );
}
