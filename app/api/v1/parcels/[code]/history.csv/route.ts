/** The same table as CSV, by its name. */
export { GET } from '../history/route.ts';
