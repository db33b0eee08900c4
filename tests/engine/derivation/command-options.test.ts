import { spawn, spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import type { Report } from '../../../shared/contracts/report.ts';

/** Options of the report command, and its end by Ctrl-C. */

const root = fileURLToPath(new URL('../../../', import.meta.url));
const program = ['server/commands/quick.mjs', 'server/commands/report.ts', '-'];

const source = `lattice chain torus 4
spins s on vertices
couplings h = 1/2
symmetry flip = prod(v: vertices) s^x[v]
model m = - sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
audit commute m with flip
audit degeneracy m [flip] on 10, 11
audit scan gap of m [flip] over h = 0 .. 1 by 1/4 on 6
`;

const run = (args: readonly string[], input = source) => {
  const { status, stdout, stderr } = spawnSync(process.execPath, [...program, ...args], { cwd: root, input });
  return { status, out: stdout.toString(), err: stderr.toString() };
};
const report = (...args: string[]): Report => JSON.parse(run(['--json', ...args]).out) as Report;
const asked = ({ claims }: Report) => claims.map(({ audit, figures }) => [audit, figures['size'] ?? null]);

describe('the report command', () => {
  it('answers on threads what it answers without, and says nothing of its progress where nobody looks', () => {
    const [alone, threads] = [run(['--json']), run(['--json', '--jobs', '2'])];
    expect([alone.status, alone.err, threads.status, threads.err]).toEqual([0, '', 0, '']);
    expect(JSON.parse(threads.out)).toEqual(JSON.parse(alone.out));
    expect((JSON.parse(alone.out) as Report).claims.map(({ grade }) => grade)).toEqual([
      'proved',
      ...['numerical', 'numerical', 'numerical'],
    ]);
  });

  it('answers the audits that were named, on the sizes that were named', () => {
    expect(asked(report('--only', 'commute,scan'))).toEqual([
      ['commute', null],
      ['scan', '6'],
    ]);
    expect(asked(report('--only=degeneracy', '--size=5, 7', '--jobs=2'))).toEqual([
      ['degeneracy', '5'],
      ['degeneracy', '7'],
    ]);
  });

  it.each([
    [['--only', 'levels'], 'there is no audit levels; there are commute'],
    [['--only'], '--only needs a value'],
    [['--jobs', 'many'], '--jobs is a whole number'],
    [['--jobs', '0'], '--jobs is a whole number'],
    [['--size', '3 x 3'], 'The size 3 x 3 cannot be used'],
    [['--size', 'large'], 'The size large cannot be used'],
    [['--quick'], 'unknown option --quick'],
  ])('refuses %j with the reason and the usage', (args, words) => {
    const { status, out, err } = run(args);
    expect([status, out]).toEqual([2, '']);
    expect(err).toContain(words);
    expect(err).toContain('usage: npm run');
  });

  it.each([['1'], ['2']])('leaves no process behind when it is interrupted with %s at work', async (jobs) => {
    const child = spawn('npm', ['run', '--silent', 'report', '--', '-', '--jobs', jobs], {
      cwd: root,
      // A group of its own, as a terminal gives one to what is typed: Ctrl-C goes to all of it.
      detached: true,
      stdio: ['pipe', 'pipe', 'pipe'],
    });
    const group = -(child.pid ?? 0);
    let out = '';
    child.stdout.on('data', (piece: Buffer) => (out += piece.toString()));
    child.stdin.end(`${source}audit degeneracy m on 17, 18, 19, 20\n`);
    const gone = new Promise<void>((resolve) => child.once('exit', () => resolve()));
    await new Promise((resolve) => setTimeout(resolve, 2_500));
    process.kill(group, 'SIGINT');
    await gone;
    const isThere = (): boolean => {
      try {
        process.kill(group, 0);
        return true;
      } catch {
        return false;
      }
    };
    for (let tries = 0; isThere() && tries < 100; tries += 1) await new Promise((resolve) => setTimeout(resolve, 50));
    expect(isThere()).toBe(false);
    expect(out).toBe('');
  });
});
