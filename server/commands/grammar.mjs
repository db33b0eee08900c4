/**
 * Compiles grammar/operator.ne to grammar/operator.grammar.ts when the compiled file is missing or older.
 * Prints nothing on success, so that commands whose standard output is data may run it first.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, renameSync, rmSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { isMain, root } from './root.mjs';

const source = join(root, 'grammar', 'operator.ne');
const target = join(root, 'grammar', 'operator.grammar.ts');

/** Throws with the compiler's words when the grammar does not compile. */
export function compileGrammar() {
  if (existsSync(target) && statSync(target).mtimeMs > statSync(source).mtimeMs) return;
  // Written beside the target and renamed: a reader never sees half a grammar, also when two builds meet.
  const partial = join(root, 'grammar', `.${process.pid}.grammar.ts`);
  const compiler = join(root, 'node_modules', 'nearley', 'bin', 'nearleyc.js');
  const run = spawnSync(process.execPath, [compiler, source, '-o', partial], { encoding: 'utf8' });
  if (run.status !== 0) {
    rmSync(partial, { force: true });
    throw new Error(`The grammar does not compile.\n${run.stderr || run.stdout || run.error?.message}`);
  }
  process.stderr.write(run.stderr);
  renameSync(partial, target);
}

if (isMain(import.meta.url)) compileGrammar();
