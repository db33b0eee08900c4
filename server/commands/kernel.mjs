/**
 * Compiles the AssemblyScript kernel of shared/spectra/kernel/assembly to shared/spectra/kernel/kernel.wasm
 * when the compiled file is missing or older than any of its sources. Prints nothing on success.
 */
import { existsSync, readdirSync, renameSync, rmSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { isMain, root } from './root.mjs';

const folder = join(root, 'shared', 'spectra', 'kernel');
const sources = join(folder, 'assembly');
const target = join(folder, 'kernel.wasm');

/** Throws with the compiler's words when the kernel does not compile. */
export async function compileKernel() {
  const newest = Math.max(...readdirSync(sources).map((name) => statSync(join(sources, name)).mtimeMs));
  if (existsSync(target) && statSync(target).mtimeMs > newest) return;
  const { default: asc } = await import('assemblyscript/asc');
  const partial = join(folder, `.${process.pid}.wasm`);
  const { error, stderr } = await asc.main([
    join(sources, 'kernel.ts'),
    ...['--outFile', partial, '--optimizeLevel', '3', '--noAssert', '--converge', '--enable', 'simd'],
    ...['--runtime', 'stub', '--importMemory', '--initialMemory', '1', '--maximumMemory', '65536'],
  ]);
  if (error) {
    rmSync(partial, { force: true });
    throw new Error(`The kernel does not compile.\n${stderr.toString() || error.message}`);
  }
  renameSync(partial, target);
}

if (isMain(import.meta.url)) await compileKernel();
