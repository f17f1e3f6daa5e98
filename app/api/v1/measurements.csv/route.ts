/** The same table as CSV, by its name. */
export { GET } from '../measurements/route.ts';
