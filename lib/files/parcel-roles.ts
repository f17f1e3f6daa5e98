/**
 * What the properties of a parcel can mean, and the names they are known by.
 */
import type { TableRole } from './table-columns.ts';

export const PARCEL_ROLES: readonly TableRole[] = [
  {
    role: 'code',
    names: [
      'parcel',
      'parcel code',
      'parcel id',
      'parcel no',
      'parcel number',
      'apn',
      'code',
      'uniqueid',
      'unique id',
      'field id',
      'field code',
      'id',
    ],
  },
  { role: 'name', names: ['name', 'parcel name', 'field name'] },
  { role: 'turnout', names: ['turnout', 'turnout code', 'turnout id', 'gate', 'outlet'] },
  { role: 'reach', names: ['reach', 'reach code', 'reach id', 'canal', 'lateral'] },
  { role: 'turnout_capacity', names: ['turnout capacity', 'gate capacity'], kind: 'flow' },
  { role: 'soil', names: ['soil', 'soil code', 'soil class', 'soil type'] },
  {
    role: 'method',
    names: ['method', 'irrigation method', 'method code', 'application method', 'irrigation', 'irrigation system', 'system type'],
  },
  { role: 'crop', names: ['crop', 'crop code', 'crop type', 'crop name', 'main crop', 'maincrop', 'croptype'] },
  { role: 'elevation', names: ['elevation', 'elev', 'altitude'], kind: 'length' },
];
