/**
 * Builds what `npm start` runs: the compiled grammar and kernel, the client in dist/client, the server's bundles in
 * dist/server. Bundles keep npm packages outside. `isStale` says whether a build is needed.
 */
import { createHash } from 'node:crypto';
import {
  copyFileSync,
  existsSync,
  mkdirSync,
  readFileSync,
  readdirSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';
import { compileGrammar } from './grammar.mjs';
import { compileKernel } from './kernel.mjs';
import { isMain, root } from './root.mjs';
import { explain } from './system.mjs';

const stamp = join(root, 'dist', '.built');
const inputs = ['grammar', 'shared', 'server', 'src', 'public', 'index.html', 'vite.config.ts', 'package-lock.json'];

/** One line for each source below a path: name, size and time of change. Generated files are left out. */
function listing(path) {
  const facts = statSync(path);
  if (!facts.isDirectory()) return [`${path} ${facts.size} ${facts.mtimeMs}`];
  const inside = readdirSync(path).filter((name) => !name.startsWith('.') && !/\.(grammar\.ts|wasm)$/.test(name));
  return inside.sort().flatMap((name) => listing(join(path, name)));
}

/** A fingerprint of all that a build reads. */
function fingerprint() {
  const lines = inputs.map((name) => join(root, name)).filter((path) => existsSync(path));
  return createHash('sha256').update(lines.flatMap(listing).join('\n')).digest('hex');
}

/** True when a source is not as it was at the last whole build, or there was none. */
export const isStale = () => !existsSync(stamp) || readFileSync(stamp, 'utf8') !== fingerprint();

/** The server's programs: each becomes a bundle of its own at the same place under dist/server. */
function programs() {
  const commands = readdirSync(join(root, 'server', 'commands')).filter((name) => name.endsWith('.ts'));
  return ['index.ts', 'worker.ts', 'evaluation/thread.ts', ...commands.map((name) => `commands/${name}`)]
    .map((name) => join(root, 'server', name))
    .filter((path) => existsSync(path));
}

/**
 * Makes dist/NAME anew: `make` fills a folder beside it, which then takes its place. A server that runs from the old one
 * keeps its programs to the last moment, and a build that fails changes nothing.
 */
async function replace(name, make) {
  const fresh = join(root, 'dist', `.${name}.${process.pid}`);
  const old = `${fresh}.old`;
  const place = join(root, 'dist', name);
  try {
    mkdirSync(fresh, { recursive: true });
    await make(fresh);
    if (existsSync(place)) renameSync(place, old);
    renameSync(fresh, place);
  } finally {
    for (const folder of [fresh, old]) rmSync(folder, { recursive: true, force: true });
  }
}

/** Removes what builds that were killed left beside the real folders; a name ends with its process's number. */
function sweep() {
  if (!existsSync(join(root, 'dist'))) return;
  for (const name of readdirSync(join(root, 'dist'))) {
    const pid = /^\.(?:server|client)\.(\d+)/.exec(name)?.[1];
    if (pid && !existsSync(`/proc/${pid}`)) rmSync(join(root, 'dist', name), { recursive: true, force: true });
  }
}

async function buildServer(outdir) {
  const { build } = await import('esbuild');
  await build({
    entryPoints: programs(),
    outdir,
    outbase: join(root, 'server'),
    bundle: true,
    packages: 'external',
    platform: 'node',
    format: 'esm',
    target: 'node20',
    sourcemap: true,
    logLevel: 'warning',
  });
  const kernel = join(root, 'shared', 'spectra', 'kernel', 'kernel.wasm');
  if (existsSync(kernel)) copyFileSync(kernel, join(outdir, 'kernel.wasm'));
  const catalogue = join(root, 'server', 'catalogue');
  mkdirSync(join(outdir, 'catalogue'), { recursive: true });
  for (const name of readdirSync(catalogue).filter((one) => one.endsWith('.gw')))
    copyFileSync(join(catalogue, name), join(outdir, 'catalogue', name));
}

async function buildClient(outDir) {
  const { build } = await import('vite');
  await build({
    root,
    configFile: join(root, 'vite.config.ts'),
    logLevel: 'warn',
    build: { outDir, emptyOutDir: true },
  });
}

export async function buildAll() {
  const sources = fingerprint();
  sweep();
  compileGrammar();
  await compileKernel();
  await replace('server', buildServer);
  await replace('client', buildClient);
  writeFileSync(stamp, sources);
}

if (isMain(import.meta.url)) {
  try {
    await buildAll();
  } catch (error) {
    explain(error);
    process.exit(1);
  }
}
