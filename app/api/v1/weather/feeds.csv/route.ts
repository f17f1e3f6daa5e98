export { GET } from '../feeds/route.ts';
