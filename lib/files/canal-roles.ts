/**
 * What the properties of a canal can mean, and the names they are known by.
 */
import type { TableRole } from './table-columns.ts';

export const CANAL_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['reach', 'reach code', 'reach id', 'code', 'id'] },
  { role: 'name', names: ['name', 'reach name', 'canal', 'canal name'] },
  { role: 'parent', names: ['parent', 'parent code', 'parent reach', 'upstream', 'from reach'] },
  { role: 'kind', names: ['kind', 'type', 'class', 'canal type'] },
  { role: 'capacity', names: ['capacity', 'design capacity', 'design flow', 'max flow'], kind: 'flow' },
  { role: 'loss_rule', names: ['loss rule', 'loss kind', 'loss'] },
  { role: 'loss_value', names: ['loss value', 'loss rate'] },
  { role: 'wetted_perimeter', names: ['wetted perimeter'], kind: 'length' },
];
