import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Kernel } from '../../shared/spectra/kernel/kernel.ts';
import { plainKernel } from '../../shared/spectra/kernel/plain.ts';
import { wasmKernel } from '../../shared/spectra/kernel/wasm.ts';

/** Where the build puts the compiled kernel, seen from the bundle of a thread; where a checkout has it, seen from here. */
const places = import.meta.url.endsWith('.ts')
  ? ['../../shared/spectra/kernel/kernel.wasm']
  : ['../kernel.wasm', './kernel.wasm'];

/** The compiled kernel with a memory of its own; the plain one where it was not built. Both give the same numbers to rounding. */
export async function loadKernel(): Promise<Kernel> {
  const file = places.map((path) => fileURLToPath(new URL(path, import.meta.url))).find((path) => existsSync(path));
  return file === undefined ? plainKernel : wasmKernel(readFileSync(file));
}
