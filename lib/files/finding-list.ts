/**
 * The findings of one reading: true counts of all, and at most a thousand kept for the eye.
 */
import type { Finding } from '../base/errors.ts';
import type { FindingCounts } from './reading.ts';

/** Most findings kept of one reading. */
export const FINDING_LIMIT = 1000;
/** Places held for each severity, so that a flood of one kind does not drown the others. */
const RESERVED = { error: 700, warning: 200, note: 100 } as const;

type Severity = Finding['severity'];

export class FindingList {
  readonly counts: Record<Severity, number> = { error: 0, warning: 0, note: 0 };
  private readonly kept: Record<Severity, Finding[]> = { error: [], warning: [], note: [] };
  /** true once a finding makes the file as a whole unusable */
  fatal = false;

  add(finding: Finding): void {
    this.counts[finding.severity]++;
    const list = this.kept[finding.severity];
    if (list.length < FINDING_LIMIT) list.push(finding);
  }

  /** Adds an error that makes the whole file unusable: nothing is staged. */
  refuse(finding: Omit<Finding, 'severity'>): void {
    this.fatal = true;
    this.add({ severity: 'error', ...finding });
  }

  error(finding: Omit<Finding, 'severity'>): void {
    this.add({ severity: 'error', ...finding });
  }

  warn(finding: Omit<Finding, 'severity'>): void {
    this.add({ severity: 'warning', ...finding });
  }

  note(finding: Omit<Finding, 'severity'>): void {
    this.add({ severity: 'note', ...finding });
  }

  /** Errors first, then warnings, then notes; never more than `FINDING_LIMIT`. */
  list(): Finding[] {
    const { error, warning, note } = this.kept;
    const total = error.length + warning.length + note.length;
    if (total <= FINDING_LIMIT) return [...error, ...warning, ...note];
    const notes = Math.min(note.length, RESERVED.note);
    const warnings = Math.min(warning.length, Math.max(RESERVED.warning, FINDING_LIMIT - notes - error.length));
    const errors = Math.min(error.length, FINDING_LIMIT - notes - warnings);
    return [...error.slice(0, errors), ...warning.slice(0, warnings), ...note.slice(0, notes)];
  }

  totals(): FindingCounts {
    return { ...this.counts };
  }
}

/** A cell's text for a finding: cut so that a hostile file cannot fill the list. */
export function shown(text: string): string {
  return text.length > 80 ? `${text.slice(0, 77)}...` : text;
}
