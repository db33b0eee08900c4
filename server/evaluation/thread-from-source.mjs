/** Runs thread.ts in a checkout: a worker thread takes no loader from its process, so it registers its own. */
import { register } from 'tsx/esm/api';

register();
await import(new URL('./thread.ts', import.meta.url).href);
