/** The same table as CSV, by its name. */
export { GET } from '../deliveries/route.ts';
