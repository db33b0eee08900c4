import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Kernel } from '../../../shared/spectra/kernel/kernel.ts';
import { plainKernel } from '../../../shared/spectra/kernel/plain.ts';
import { wasmKernel } from '../../../shared/spectra/kernel/wasm.ts';

/** Both kernels; the wasm one is compiled from its sources first, if that has not been done. */
export async function bothKernels(): Promise<readonly Kernel[]> {
  const command = fileURLToPath(new URL('../../../server/commands/kernel.mjs', import.meta.url));
  const run = spawnSync(process.execPath, [command], { encoding: 'utf8' });
  if (run.status !== 0) throw new Error(run.stderr);
  const file = new URL('../../../shared/spectra/kernel/kernel.wasm', import.meta.url);
  return [plainKernel, await wasmKernel(readFileSync(file))];
}
