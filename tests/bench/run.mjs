/** `npm run bench [NAME …]`: builds, then runs each benchmark of this folder (or those named) by itself, one after the other. */
import { spawnSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { root } from '../../server/commands/root.mjs';

const folder = join(root, 'tests', 'bench');
const wanted = process.argv.slice(2);
const all = readdirSync(folder).filter((name) => name.endsWith('.ts') && !name.startsWith('.'));
const chosen = all.filter((name) => wanted.length === 0 || wanted.includes(name.replace(/\.ts$/, '')));
const run = (...words) => spawnSync(process.execPath, words, { cwd: root, stdio: 'inherit' }).status ?? 1;

if (chosen.length === 0) process.stderr.write(`No such benchmark. There are: ${all.join(', ')}\n`);
let worst = chosen.length === 0 ? 2 : run(join('server', 'commands', 'build.mjs'));
if (worst === 0) for (const name of chosen) worst = Math.max(worst, run('--import', 'tsx', join(folder, name)));
process.exit(worst);
