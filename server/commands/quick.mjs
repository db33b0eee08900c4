/**
 * Runs a TypeScript command in this process, straight from a checkout: `node server/commands/quick.mjs FILE.ts [ARGUMENTS]`.
 * The grammar and the kernel are compiled first where they are missing or stale; nothing is printed, so standard output is the
 * command's own.
 * Arguments that name a file are read from where `npm run` was called, which npm hides by going to the checkout.
 */
import { existsSync } from 'node:fs';
import { isAbsolute, join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { compileGrammar } from './grammar.mjs';
import { compileKernel } from './kernel.mjs';
import { root } from './root.mjs';

const [command, ...given] = process.argv.slice(2);
const caller = process.env.INIT_CWD ?? process.cwd();
const placed = given.map((word) => {
  const there = resolve(caller, word);
  return !word.startsWith('-') && !isAbsolute(word) && existsSync(there) ? there : word;
});
if (!existsSync(join(root, 'node_modules', 'tsx'))) {
  process.stderr.write('The npm packages are missing. Run `npm ci` first.\n');
  process.exit(2);
}
compileGrammar();
// Without the compiled kernel the plain one does the same, more slowly.
await compileKernel().catch(() => undefined);
const { register } = await import('tsx/esm/api');
register();
const file = join(root, command);
process.argv.splice(1, process.argv.length - 1, file, ...placed);
await import(pathToFileURL(file).href);
