/** What the properties of service areas and of soil polygons can mean. */
import type { TableRole } from './table-columns.ts';

export const AREA_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['area', 'area code', 'service area', 'service area code', 'area id', 'code', 'id'] },
  { role: 'name', names: ['name', 'area name', 'service area name', 'company'] },
  { role: 'reach', names: ['reach', 'reach code', 'reach id', 'canal', 'lateral'] },
  { role: 'turnout', names: ['turnout', 'turnout code', 'turnout id', 'gate', 'outlet'] },
];

export const SOIL_AREA_ROLES: readonly TableRole[] = [
  { role: 'code', names: ['polygon', 'polygon code', 'polygon id', 'soil polygon', 'code', 'id', 'fid'] },
  {
    role: 'soil',
    names: ['soil', 'soil code', 'soil class', 'soil type', 'class', 'soil name', 'texture', 'map unit', 'mapunit', 'symbol'],
  },
];
