/**
 * Roles of the columns of a plain table (stations, plantings, soils) and of the properties of features: a closed list of names per role.
 */
import { columnName, unitSuffixes } from './column-name.ts';
import { type FindingList, shown } from './finding-list.ts';
import type { ColumnPlan, UnderstoodColumn } from './reading.ts';
import { findUnit, insideUnit, type UnitKind, unitConverter, unitNames } from './unit.ts';

export interface TableRole {
  readonly role: string;
  /** names, words divided by a blank, the preferred one first */
  readonly names: readonly string[];
  readonly kind?: UnitKind;
  readonly required?: boolean;
}

/** Where a role is found, and how its numbers become the inside unit. */
interface BoundColumn {
  readonly index: number;
  readonly header: string;
  readonly convert: (value: number) => number;
}

export interface BoundTable {
  readonly columns: UnderstoodColumn[];
  readonly bound: ReadonlyMap<string, BoundColumn>;
}

interface Match {
  role: TableRole;
  unitText: string | null;
  rank: number;
}

/** Role that a header names, with the unit written in it; null when it names none. */
export function tableRoleOf(header: string, roles: readonly TableRole[]): Match | null {
  const { words, unitText } = columnName(header);
  for (const { rest, suffix } of [{ rest: words, suffix: null }, ...unitSuffixes(words)]) {
    const name = rest.join(' ');
    for (const role of roles) {
      const rank = role.names.indexOf(name);
      if (rank < 0) continue;
      if (suffix === null) return { role, unitText, rank };
      if (role.kind && findUnit(role.kind, suffix)) return { role, unitText: unitText ?? suffix, rank };
    }
  }
  return null;
}

export interface BindRequest {
  readonly headers: readonly string[];
  readonly roles: readonly TableRole[];
  readonly plan: ColumnPlan;
  readonly units: readonly string[] | null;
  readonly sample: (index: number) => string[];
  /** unit taken for a kind when nothing says otherwise */
  readonly assumed?: Partial<Record<UnitKind, string>>;
  readonly file: string;
}

/** Gives every column its role: the plan first, then the name. Two columns of one role: the preferred name wins, the other is ignored with a warning. */
export function bindColumns(request: BindRequest, findings: FindingList): BoundTable {
  const { headers, roles, plan, units } = request;
  const winners = new Map<string, { index: number; rank: number }>();
  const matches = headers.map((header, index) => {
    const match = plannedMatch(header, index, roles, plan) ?? tableRoleOf(header, roles);
    if (match) contend(match, index, winners, request, findings);
    return match;
  });
  const bound = new Map<string, BoundColumn>();
  const columns = headers.map((header, index): UnderstoodColumn => {
    const match = matches[index];
    const sample = request.sample(index);
    if (!match || winners.get(match.role.role)?.index !== index) {
      return {
        index,
        header,
        unitText: null,
        role: null,
        unit: null,
        confidence: 0,
        sample,
        reason: match ? 'another column has this role' : 'not used',
      };
    }
    const unitText = match.unitText ?? (units?.[index] || null);
    const unit = unitOf(match.role, unitText, request, header, findings);
    bound.set(match.role.role, { index, header, convert: (unit && match.role.kind && unitConverter(match.role.kind, unit)) || ((v) => v) });
    return { index, header, unitText, role: match.role.role, unit, confidence: unitText || !match.role.kind ? 0.95 : 0.7, sample };
  });
  return { columns, bound };
}

function plannedMatch(header: string, index: number, roles: readonly TableRole[], plan: ColumnPlan): Match | null {
  const planned = plan.columns?.[header] ?? plan.columns?.[String(index)];
  if (!planned) return null;
  const role = roles.find((candidate) => candidate.role === planned.role);
  return role ? { role, unitText: planned.unit ?? null, rank: -1 } : null;
}

function contend(
  match: Match,
  index: number,
  winners: Map<string, { index: number; rank: number }>,
  request: BindRequest,
  findings: FindingList,
): void {
  const planned = request.plan.columns?.[request.headers[index]] ?? request.plan.columns?.[String(index)];
  if (planned && planned.role === null) return;
  const rival = winners.get(match.role.role);
  if (!rival || match.rank < rival.rank) winners.set(match.role.role, { index, rank: match.rank });
  if (!rival) return;
  const kept = request.headers[winners.get(match.role.role)?.index ?? index];
  findings.warn({
    code: 'duplicate-column',
    message: `Columns "${shown(request.headers[rival.index])}" and "${shown(request.headers[index])}" both name ${match.role.role}; "${shown(kept)}" is used.`,
    file: request.file,
    column: request.headers[index],
    advice: 'Choose the other one in the column plan if that is meant.',
  });
}

function unitOf(role: TableRole, unitText: string | null, request: BindRequest, header: string, findings: FindingList): string | null {
  if (!role.kind) return null;
  const unit = unitText ? findUnit(role.kind, unitText) : null;
  if (unitText && !unit) {
    findings.warn({
      code: 'unknown-unit',
      message: `Unit "${shown(unitText)}" of column "${shown(header)}" is not known; the values are read in ${request.assumed?.[role.kind] ?? insideUnit(role.kind)}.`,
      file: request.file,
      column: header,
      value: shown(unitText),
      limit: unitNames(role.kind).join(', '),
      advice: 'Choose the unit in the column plan.',
    });
  }
  const assumed = request.assumed?.[role.kind] ?? insideUnit(role.kind);
  if (!unitText && assumed !== insideUnit(role.kind)) {
    findings.warn({
      code: 'unit-assumed',
      message: `Column "${shown(header)}" names no unit; its values are read in ${assumed}.`,
      file: request.file,
      column: header,
      limit: unitNames(role.kind).join(', '),
      advice: 'Choose the unit in the column plan if it is another.',
    });
  }
  return unit ?? assumed;
}

/** Errors for required roles that no column has; false when any is missing. */
export function requireRoles(roles: readonly TableRole[], bound: BoundTable['bound'], file: string, findings: FindingList): boolean {
  let complete = true;
  for (const role of roles) {
    if (!role.required || bound.has(role.role)) continue;
    complete = false;
    findings.refuse({
      code: 'missing-column',
      message: `No column for ${role.role} was found.`,
      file,
      column: role.role,
      advice: `Name a column "${role.names[0]}", or choose one in the column plan.`,
    });
  }
  return complete;
}

/** Up to five different filled cells of a column. */
export function sampleOf(rows: readonly (readonly string[])[], index: number): string[] {
  const seen = new Set<string>();
  for (const cells of rows) {
    const cell = cells[index]?.trim();
    if (cell) seen.add(shown(cell));
    if (seen.size >= 5) break;
  }
  return [...seen];
}
