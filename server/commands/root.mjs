import { realpathSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';

/** The folder of the checkout, absolute, wherever the command was called from. */
export const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));

/** True in the file that Node was started with (and not when it is imported); holds behind symbolic links too. */
export const isMain = (url) => process.argv[1] !== undefined && realpathSync(process.argv[1]) === fileURLToPath(url);
