export { GET } from '../frost/route.ts';
