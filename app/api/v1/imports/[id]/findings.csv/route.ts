export { GET } from '../findings/route.ts';
