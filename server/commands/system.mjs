/**
 * What a command needs from the machine: npm packages, Debian packages, a free port. Node built-ins only, because these
 * functions run before anything is installed.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { delimiter, join } from 'node:path';
import { root } from './root.mjs';

/** A failure that a person can mend: shown as its message alone, without a stack. */
export class Trouble extends Error {}

/** Shows an error to whoever started a command: a `Trouble` as its words, anything else with its stack. */
export function explain(error) {
  process.stderr.write(`\n${error instanceof Trouble ? error.message : (error?.stack ?? error)}\n`);
}

export const isRoot = () => process.getuid?.() === 0;

/** The full path of a program on PATH, or undefined. */
export function onPath(name) {
  const folders = (process.env.PATH ?? '').split(delimiter).filter(Boolean);
  return folders.map((folder) => join(folder, name)).find((path) => existsSync(path));
}

/** Throws unless Node is at least the version that package.json asks for. */
export function checkNode() {
  const wanted = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8')).engines.node.replace(/[^\d.]/g, '');
  const [a, b] = [wanted, process.versions.node].map((text) => text.split('.').map(Number));
  const older = a[0] !== b[0] ? b[0] < a[0] : b[1] < a[1];
  if (older) throw new Trouble(`Node ${wanted} or newer is needed; this is ${process.versions.node}.`);
}

/**
 * Whether node_modules holds what package-lock.json names. npm writes beside the packages which versions it put there,
 * so the two lists are compared; no mark of our own that a plain `npm ci` would not set.
 */
function packagesAreThere() {
  const installed = join(root, 'node_modules', '.package-lock.json');
  if (!existsSync(installed)) return false;
  const wanted = JSON.parse(readFileSync(join(root, 'package-lock.json'), 'utf8')).packages;
  const present = JSON.parse(readFileSync(installed, 'utf8')).packages;
  return Object.entries(wanted).every(
    ([place, entry]) => place === '' || entry.optional || present[place]?.version === entry.version,
  );
}

/** Runs `npm ci` when packages are missing or the lock file has changed since. */
export function ensurePackages(say) {
  if (packagesAreThere()) return;
  say('Installing npm packages');
  const npm = process.env.npm_execpath;
  const words = ['ci', '--include=dev', '--no-fund', '--no-audit', '--no-progress', '--loglevel=error'];
  const run = npm?.endsWith('.js')
    ? spawnSync(process.execPath, [npm, ...words], { cwd: root, stdio: ['ignore', 2, 2] })
    : spawnSync('npm', words, { cwd: root, stdio: ['ignore', 2, 2] });
  if (run.status !== 0) throw new Trouble('`npm ci` failed; its output stands above.');
}

/** Words of a command as a shell takes them. */
const shown = (words) => words.map((word) => (/^[\w./=-]+$/.test(word) ? word : `'${word}'`)).join(' ');

/**
 * Installs Debian packages, as root or by sudo without a password. `purpose` begins the message that a person gets who
 * has to install them by hand. `before` and `after` are shell lines that run as root around the installation.
 */
export function installDebian(packages, { say, purpose, before, after }) {
  const install = ['apt-get', 'install', '-y', '--no-install-recommends', ...packages];
  const byHand = `${purpose}\n  sudo apt-get update && sudo ${shown(install)}`;
  if (!onPath('apt-get')) {
    throw new Trouble(`${purpose}\nThis system has no apt-get: install ${packages.join(', ')} in its own way.`);
  }
  const raise = isRoot() ? [] : ['sudo', '-n'];
  if (!isRoot() && (!onPath('sudo') || spawnSync('sudo', ['-n', 'true']).status !== 0)) throw new Trouble(byHand);
  say(`Installing ${packages.join(', ')}`);
  const asRoot = (words) => {
    const line = [...raise, 'env', 'DEBIAN_FRONTEND=noninteractive', ...words];
    return spawnSync(line[0], line.slice(1), { stdio: ['ignore', 'pipe', 'pipe'], encoding: 'utf8' });
  };
  // A list that cannot be refreshed may still do: only the installation itself decides.
  asRoot(['apt-get', 'update']);
  if (before) asRoot(['sh', '-c', before]);
  const run = asRoot(install);
  if (after) asRoot(['sh', '-c', after]);
  if (run.status !== 0) throw new Trouble(`${run.stdout}${run.stderr}\nThe installation failed. ${byHand}`);
}

/** Whether a server could listen on this port now. */
export function isFree(port, host = '127.0.0.1') {
  return new Promise((resolve) => {
    const probe = createServer();
    probe.once('error', () => resolve(false));
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** A port that the system says is free on loopback. @returns {Promise<number>} */
export function freePort() {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const { port } = probe.address();
      probe.close(() => resolve(port));
    });
  });
}
