export { GET } from '../corrections/route.ts';
