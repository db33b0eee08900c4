/** For those who say which engine computes here, and need none. */
export { engineVersion } from '../../shared/derivation/engine.ts';
