// Entry of a compute thread when the program runs from its TypeScript source: threads do not inherit tsx's loader.
import { register } from 'tsx/esm/api';

register();

const { default: compute } = await import('./compute.ts');

export default compute;
