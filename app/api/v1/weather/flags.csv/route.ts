export { GET } from '../flags/route.ts';
