/**
 * A private PostgreSQL cluster on loopback: one that keeps its data for the application, one that is thrown away for
 * tests. As root the database runs under Debian's `postgres` account (PostgreSQL refuses root), else under the caller's.
 * Node built-ins only. Servers listen on 127.0.0.1 alone and on no Unix socket: socket paths are limited in length and
 * a folder with a space would break them.
 */
import { spawnSync } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import { chmodSync, chownSync, existsSync, mkdirSync, mkdtempSync, readFileSync, readdirSync } from 'node:fs';
import { accessSync, constants, renameSync, rmSync, statSync, statfsSync, writeFileSync } from 'node:fs';
import { homedir, tmpdir, userInfo } from 'node:os';
import { join } from 'node:path';
import { root } from './root.mjs';
import { Trouble, freePort, installDebian, isRoot, onPath } from './system.mjs';

const account = 'gaugewright';

/** Folders with initdb and postgres, by version, newest first: Debian's, then whatever stands on PATH. */
function installations() {
  const debian = '/usr/lib/postgresql';
  const found = (existsSync(debian) ? readdirSync(debian) : [])
    .filter((version) => existsSync(join(debian, version, 'bin', 'initdb')))
    .map((version) => ({ version: Number(version), bin: join(debian, version, 'bin') }))
    .sort((a, b) => b.version - a.version);
  const other = onPath('initdb');
  if (other) {
    const words = spawnSync(other, ['--version'], { encoding: 'utf8' }).stdout ?? '';
    found.push({ version: Number(/(\d+)[.\s\w]*$/.exec(words.trim())?.[1] ?? 0), bin: join(other, '..') });
  }
  return found;
}

/** Makes sure that PostgreSQL's programs are there; installs Debian's package without its system cluster. */
export function ensurePostgres(say) {
  if (installations().length > 0) return;
  const folder = '/etc/postgresql-common/createcluster.d';
  const file = `${folder}/50-gaugewright.conf`;
  installDebian(['postgresql'], {
    say,
    purpose: 'PostgreSQL is needed and not installed. Install it, or set DATABASE_URL to a database of your own:',
    before: `mkdir -p ${folder} && echo 'create_main_cluster = false' > ${file}`,
    after: `rm -f ${file}`,
  });
}

/** The programs for a data folder: those of its own version where it has one, else the newest. */
function programs(data) {
  const all = installations();
  const file = join(data, 'PG_VERSION');
  if (!existsSync(file)) return all[0].bin;
  const version = Number(readFileSync(file, 'utf8'));
  const match = all.find((one) => one.version === version);
  if (match) return match.bin;
  const have = all.map((one) => one.version).join(', ');
  throw new Trouble(
    `The database in ${data} was made by PostgreSQL ${version}; installed: ${have}.\n` +
      `Install postgresql-${version}, or dump the data there and load it into a new database.`,
  );
}

/** The account that runs the database: `{}` for the caller's own, uid and gid of `postgres` for root. */
function runner() {
  if (!isRoot()) {
    try {
      userInfo();
    } catch {
      throw new Trouble(`PostgreSQL needs an account: user id ${process.getuid()} has no entry in /etc/passwd.`);
    }
    return {};
  }
  const id = (flag) => Number(spawnSync('id', [flag, 'postgres'], { encoding: 'utf8' }).stdout || NaN);
  const [uid, gid] = [id('-u'), id('-g')];
  if (Number.isNaN(uid)) throw new Trouble('PostgreSQL refuses to run as root, and there is no account `postgres`.');
  return { uid, gid };
}

/** Whether the account that runs the database can enter a folder (a checkout below /root is closed to it). */
const canEnter = (folder, as) =>
  spawnSync('sh', ['-c', 'test -x "$1"', 'sh', folder], { ...as, cwd: '/' }).status === 0;

function canWrite(folder) {
  try {
    accessSync(folder, constants.W_OK);
    return true;
  } catch {
    return false;
  }
}

/**
 * The folder that keeps what outlives a start: database, lock, secret. `.var` in the checkout, or, where the database's
 * account cannot go there, a folder for this checkout under /var/lib (root) or the user's state folder.
 */
export function stateFolder() {
  const inside = join(root, '.var');
  const name = createHash('sha256').update(root).digest('hex').slice(0, 12);
  const home = process.env.XDG_STATE_HOME || join(homedir(), '.local', 'state');
  const outside = join(isRoot() ? '/var/lib' : home, 'gaugewright', name);
  const fits = canWrite(root) && (!isRoot() || installations().length === 0 || canEnter(root, runner()));
  const folder = fits ? inside : outside;
  mkdirSync(folder, { recursive: true });
  // A strict umask would close it to the database's account, which has to pass through.
  if (isRoot()) for (const path of fits ? [folder] : [join(folder, '..'), folder]) chmodSync(path, 0o711);
  return folder;
}

/** Runs one of PostgreSQL's programs to its end; throws with its words when it fails. */
function run(bin, name, words, as) {
  const done = spawnSync(join(bin, name), words, { ...as, cwd: '/', encoding: 'utf8', timeout: 120_000 });
  if (done.status !== 0) {
    throw new Error(`${name} failed: ${done.error?.message ?? `${done.stdout ?? ''}${done.stderr ?? ''}`.trim()}`);
  }
  return done.stdout;
}

/** Makes `folder` (mode 0700) the database account's own. */
function claim(folder, as) {
  mkdirSync(folder, { recursive: true });
  if (as.uid !== undefined) chownSync(folder, as.uid, as.gid);
  chmodSync(folder, 0o700);
}

/** Creates a cluster in `folder`/data with a random password beside it. A half-made one is never left under that name. */
function create(folder, bin, as, extra = []) {
  const data = join(folder, 'data');
  const unfinished = join(folder, 'data.new');
  rmSync(unfinished, { recursive: true, force: true });
  const file = join(folder, 'password');
  writeFileSync(file, randomBytes(24).toString('base64url'), { mode: 0o600 });
  if (as.uid !== undefined) chownSync(file, as.uid, as.gid);
  const words = ['-D', unfinished, '-U', account, '-A', 'scram-sha-256', `--pwfile=${file}`, '-E', 'UTF8'];
  run(bin, 'initdb', [...words, '--locale=C.UTF-8', ...extra], as);
  renameSync(unfinished, data);
}

/** The port of a running cluster, from line 4 of its pid file; undefined when it does not run. */
function runningPort(bin, data, as) {
  const status = spawnSync(join(bin, 'pg_ctl'), ['-D', data, 'status'], { ...as, cwd: '/' });
  return status.status === 0 ? Number(readFileSync(join(data, 'postmaster.pid'), 'utf8').split('\n')[3]) : undefined;
}

/** Starts the cluster on a free port and returns the port; another program may take that port in between, so it tries again. */
async function launch(folder, bin, as, settings = []) {
  const options = settings.map((setting) => `-c ${setting}`).join(' ');
  for (let attempt = 1; ; attempt += 1) {
    const port = await freePort();
    const server = `-p ${port} -h 127.0.0.1 -k '' ${options}`;
    try {
      run(
        bin,
        'pg_ctl',
        ['-D', join(folder, 'data'), '-l', join(folder, 'log'), '-w', '-t', '60', '-o', server, 'start'],
        as,
      );
      return port;
    } catch (error) {
      if (attempt < 3) continue;
      const log = existsSync(join(folder, 'log')) ? readFileSync(join(folder, 'log'), 'utf8') : '';
      throw new Trouble(`PostgreSQL does not start. ${error.message}\n${log.split('\n').slice(-12).join('\n')}`);
    }
  }
}

const address = (folder, port, database) =>
  `postgres://${account}:${readFileSync(join(folder, 'password'), 'utf8').trim()}@127.0.0.1:${port}/${database}`;

/** The account that owns an existing data folder: root runs it as that account, another user cannot. */
function ownerOf(data, as) {
  if (!existsSync(data)) return as;
  const { uid, gid } = statSync(data);
  if (uid === (as.uid ?? process.getuid())) return as;
  if (isRoot()) return { uid, gid };
  throw new Trouble(
    `The database in ${data} belongs to user id ${uid}: it was first started by another account.\n` +
      'Start as that account, or give DATABASE_URL, or make a checkout of your own.',
  );
}

/**
 * The application's cluster in `state`/pg: made at the first call, started when it does not run, reused when it does
 * (an earlier start may have been killed). Returns the URL of its maintenance database and `stop`.
 */
export async function openCluster(state) {
  const folder = join(state, 'pg');
  const data = join(folder, 'data');
  const unreadable = existsSync(folder) && !isRoot() && statSync(folder).uid !== process.getuid();
  const as = ownerOf(unreadable ? folder : data, runner());
  const bin = programs(data);
  claim(folder, as);
  if (!existsSync(data)) create(folder, bin, as);
  const port = runningPort(bin, data, as) ?? (await launch(folder, bin, as));
  return {
    url: address(folder, port, 'postgres'),
    bin,
    stop: () => void run(bin, 'pg_ctl', ['-D', data, '-m', 'fast', '-w', '-t', '30', 'stop'], as),
  };
}

/** The URL of the application's cluster if it runs now, else undefined. Starts nothing. */
export function findCluster(state) {
  const folder = join(state, 'pg');
  const data = join(folder, 'data');
  if (!existsSync(data)) return undefined;
  const port = runningPort(programs(data), data, ownerOf(data, runner()));
  return port === undefined ? undefined : address(folder, port, 'postgres');
}

/** Where a throwaway cluster lives: memory where there is room for it, else the temporary folder. */
function fastFolder() {
  const memory = '/dev/shm';
  const usable = existsSync(memory) && canWrite(memory);
  const free = usable ? statfsSync(memory) : { bavail: 0, bsize: 1 };
  return free.bavail * free.bsize > 512 * 2 ** 20 ? memory : tmpdir();
}

const throwaway = /^gaugewright-(\d+)-/;

/** Stops a throwaway cluster, if it runs, and deletes it. */
function discard(folder, bin, as) {
  const data = join(folder, 'data');
  try {
    if (existsSync(join(data, 'postmaster.pid'))) run(bin, 'pg_ctl', ['-D', data, '-m', 'immediate', '-w', 'stop'], as);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Discards the throwaway clusters of processes that were killed before they could; a folder's name holds its owner's number. */
function sweep(place, bin, as) {
  for (const name of readdirSync(place)) {
    const pid = throwaway.exec(name)?.[1];
    if (pid === undefined || existsSync(`/proc/${pid}`)) continue;
    const folder = join(place, name);
    if (statSync(folder).uid === (as.uid ?? process.getuid())) discard(folder, bin, as);
  }
}

/** A cluster for tests: quick instead of durable, gone after `stop` or with this process. */
export async function openThrowaway() {
  const as = runner();
  const place = fastFolder();
  const bin = programs(join(place, 'none'));
  sweep(place, bin, as);
  const folder = mkdtempSync(join(place, `gaugewright-${process.pid}-`));
  claim(folder, as);
  const stop = () => {
    process.off('exit', stop);
    discard(folder, bin, as);
  };
  process.once('exit', stop);
  try {
    create(folder, bin, as, ['-N']);
    const quick = ['fsync=off', 'synchronous_commit=off', 'full_page_writes=off', 'wal_level=minimal'];
    const port = await launch(folder, bin, as, [
      ...quick,
      'max_wal_senders=0',
      'autovacuum=off',
      'max_connections=200',
    ]);
    return { url: address(folder, port, 'postgres'), bin, stop };
  } catch (error) {
    stop();
    throw error;
  }
}
