/**
 * `npm test`: installs what is missing, then checks types, lint, build and every test project, and ends with one line,
 * `N passed, N failed`. Types, lint and build count as one check each. With arguments (`npm test -- tests/engine/lattice`)
 * it runs only the matching test files.
 */
import { spawn } from 'node:child_process';
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { ensurePostgres } from '../server/commands/cluster.mjs';
import { root } from '../server/commands/root.mjs';
import { checkNode, ensurePackages, explain, installDebian } from '../server/commands/system.mjs';

const say = (text) => process.stdout.write(`${text}\n`);
const running = new Set();

/** Runs a program of node_modules (or of ours) to its end; its output is shown as it comes, or kept for a failure. */
function run(words, { quiet }) {
  const began = Date.now();
  const child = spawn(process.execPath, words, {
    cwd: root,
    stdio: ['ignore', quiet ? 'pipe' : 'inherit', quiet ? 'pipe' : 'inherit'],
    env: { ...process.env, NODE_ENV: undefined },
  });
  running.add(child);
  let output = '';
  for (const stream of [child.stdout, child.stderr]) stream?.on('data', (piece) => (output += piece));
  return new Promise((resolve) => {
    child.once('close', (code) => {
      running.delete(child);
      resolve({ code: code ?? 1, output, seconds: Math.round((Date.now() - began) / 1000) });
    });
  });
}

/** One check that either holds or does not; its output is shown when it does not. */
async function check(name, ...steps) {
  for (const words of steps) {
    const { code, output, seconds } = await run(words, { quiet: true });
    if (code === 0 && words === steps.at(-1)) say(`${name}: holds (${seconds} s)`);
    if (code === 0) continue;
    say(`${name}: FAILS (${seconds} s)\n${output}`);
    return { name, passed: 0, failed: 1 };
  }
  return { name, passed: 1, failed: 0 };
}

const tool = (path) => join('node_modules', ...path.split('/'));

/** All vitest projects; the counts come from vitest's own report. A file that does not load is one failure. */
async function tests(filters) {
  const report = join(root, 'dist', 'tests.json');
  mkdirSync(join(root, 'dist'), { recursive: true });
  rmSync(report, { force: true });
  const reporters = ['--reporter=default', '--reporter=json', `--outputFile.json=${report}`];
  const { code } = await run([tool('vitest/vitest.mjs'), 'run', ...reporters, ...filters], { quiet: false });
  if (!existsSync(report)) return { name: 'tests', passed: 0, failed: 1 };
  const { numPassedTests, numFailedTests, testResults } = JSON.parse(readFileSync(report, 'utf8'));
  const unloaded = testResults.filter((file) => file.status === 'failed' && file.assertionResults.length === 0).length;
  const failed = numFailedTests + unloaded;
  // Vitest may also fail as a whole, on an error outside every test: that is a failure too.
  return { name: 'tests', passed: numPassedTests, failed: failed === 0 && code !== 0 ? 1 : failed };
}

function ensureChromium() {
  if (existsSync('/usr/bin/chromium')) return;
  installDebian(['chromium'], { say, purpose: 'The browser tests need Chromium, which is not installed. Install it:' });
}

for (const signal of ['SIGINT', 'SIGTERM']) {
  process.on(signal, () => {
    // Vitest takes its surroundings down on SIGINT; SIGTERM would end it on the spot.
    for (const child of running) child.kill('SIGINT');
    process.exitCode = 1;
  });
}

const filters = process.argv.slice(2);
try {
  checkNode();
  ensurePackages(say);
  ensurePostgres(say);
  ensureChromium();
  const results = [];
  const generated = await check('grammar and kernel', ['server/commands/grammar.mjs'], ['server/commands/kernel.mjs']);
  if (generated.failed) results.push(generated);
  if (filters.length === 0) {
    const [types, lint] = await Promise.all([
      check('types', [tool('typescript/bin/tsc'), '--noEmit']),
      check('lint', [tool('eslint/bin/eslint.js'), '.'], [tool('prettier/bin/prettier.cjs'), '--check', '.']),
    ]);
    results.push(types, lint, await check('build', ['server/commands/build.mjs']));
  }
  results.push(await tests(filters));
  const sum = (key) => results.reduce((total, one) => total + one[key], 0);
  const broken = results.filter((one) => one.failed > 0).map((one) => one.name);
  if (broken.length > 0) say(`\nFailed: ${broken.join(', ')}; the reasons stand above.`);
  say(`\n${sum('passed')} passed, ${sum('failed')} failed`);
  process.exitCode = sum('failed') === 0 && sum('passed') > 0 ? 0 : 1;
} catch (error) {
  explain(error);
  say('\n0 passed, 1 failed');
  process.exitCode = 1;
}
