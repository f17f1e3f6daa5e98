export { GET } from '../nights/route.ts';
