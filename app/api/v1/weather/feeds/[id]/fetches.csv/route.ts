export { GET } from '../fetches/route.ts';
