/**
 * Compiles grammar/operator.ne to grammar/operator.grammar.ts when the compiled file is missing or older.
 * Prints nothing on success, so that commands whose standard output is data may run it first.
 */
import { existsSync, mkdirSync, renameSync, rmSync, statSync } from 'node:fs'
import { spawnSync } from 'node:child_process'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'

const root = dirname(dirname(fileURLToPath(import.meta.url)))
const source = join(root, 'grammar', 'operator.ne')
const target = join(root, 'grammar', 'operator.grammar.ts')

/** True when `made` exists and is not older than `from`. */
const fresh = (made, from) => existsSync(made) && statSync(made).mtimeMs >= statSync(from).mtimeMs

export function compileGrammar() {
  if (fresh(target, source)) return
  mkdirSync(dirname(target), { recursive: true })
  // Written beside the target and renamed: a reader never sees half a grammar, also when two builds meet.
  const partial = join(dirname(target), `.${process.pid}.operator.grammar.ts`)
  const compiler = join(root, 'node_modules', 'nearley', 'bin', 'nearleyc.js')
  const run = spawnSync(process.execPath, [compiler, source, '-o', partial], { encoding: 'utf8' })
  if (run.status !== 0) {
    rmSync(partial, { force: true })
    throw new Error(`The grammar does not compile:\n${run.stderr || run.stdout || run.error?.message}`)
  }
  if (run.stderr) process.stderr.write(run.stderr)
  renameSync(partial, target)
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  try {
    if (existsSync(source)) compileGrammar()
  } catch (error) {
    process.stderr.write(`${error.message}\n`)
    process.exit(1)
  }
}
