export { GET } from '../critical-temperatures/route.ts';
