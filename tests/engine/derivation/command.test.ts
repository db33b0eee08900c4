import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { reportSchema } from '../../../shared/contracts/report.ts';

/** The report command as other programs run it: what it prints where, and how it ends. */

const root = fileURLToPath(new URL('../../../', import.meta.url));
let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'gaugewright-'));
});
afterAll(() => {
  rmSync(folder, { recursive: true, force: true });
});

interface Ended {
  readonly code: number | null;
  readonly out: string;
  readonly err: string;
}

function run(args: readonly string[], input = ''): Promise<Ended> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, ['--import', 'tsx', 'server/commands/report.ts', ...args], { cwd: root });
    let [out, err] = ['', ''];
    child.stdout.on('data', (chunk: Buffer) => (out += chunk.toString()));
    child.stderr.on('data', (chunk: Buffer) => (err += chunk.toString()));
    child.on('error', reject);
    child.on('close', (code) => {
      resolve({ code, out, err });
    });
    child.stdin.end(input);
  });
}

const file = (name: string, text: string): string => {
  const path = join(folder, name);
  writeFileSync(path, text);
  return path;
};

const good = `lattice chain torus 4
spins σ on vertices
symmetry flip = prod(v: vertices) σ^x[v]
model m = - sum(l: links) σ^z[l.a] σ^z[l.b] - 1/2 sum(v: vertices) σ^x[v]
audit commute m with flip
audit degeneracy m [flip]
`;

describe('the report command', () => {
  it('prints one JSON object and ends with 0, also where a claim is refuted', async () => {
    const text = `${good}symmetry other = prod(v: vertices) σ^z[v]\naudit commute m with other\n`;
    const { code, out, err } = await run([file('good.gw', text), '--json']);
    expect(code).toBe(0);
    expect(err).toBe('');
    expect(out.trimEnd()).not.toContain('\n');
    const report = reportSchema.parse(JSON.parse(out));
    expect(report.format).toBe('gaugewright-report/1');
    expect(report.claims.map((c) => c.grade)).toEqual(['proved', 'numerical', 'refuted']);
  });

  it('ends with 1 where the source has problems, and still gives the rest', async () => {
    const { code, out } = await run([file('bad.gw', `${good}model n = m + K sum(v: vertices) σ^x[v]\n`), '--json']);
    expect(code).toBe(1);
    const report = reportSchema.parse(JSON.parse(out));
    expect(report.problems).toMatchObject([{ line: 7, column: 15, length: 1 }]);
    expect(report.claims).toHaveLength(2);
  });

  it('ends with 2 and says how it is used', async () => {
    for (const args of [[], [join(folder, 'none.gw')], [file('a.gw', good), '--nonsense'], ['a.gw', 'b.gw']]) {
      const { code, out, err } = await run(args);
      expect(code).toBe(2);
      expect(out).toBe('');
      expect(err).toContain('usage:');
    }
  });

  it('reads standard input, empty sources and other line ends', async () => {
    const piped = await run(['-', '--json'], good.replaceAll('\n', '\r\n'));
    expect(piped.code).toBe(0);
    expect(reportSchema.parse(JSON.parse(piped.out)).claims).toHaveLength(2);
    const empty = await run(['-', '--json'], '');
    expect(empty.code).toBe(0);
    expect(reportSchema.parse(JSON.parse(empty.out)).claims).toEqual([]);
  });
});
