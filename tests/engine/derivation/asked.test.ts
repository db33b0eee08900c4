import { describe, expect, it } from 'vitest';
import type { Finding, Means, Progress } from '../../../shared/audits/audit.ts';
import { type Asked, answerAsked, askedIn, WrongSizes } from '../../../shared/derivation/asked.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import { plainKernel } from '../../../shared/spectra/kernel/plain.ts';

const head = `lattice chain torus 6
spins s on vertices
couplings J = 1, h = 0.6
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]
`;
const means: Means = { kernel: plainKernel, limit: { operations: 1e12, bytes: 2 ** 30 } };
const plain = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T;

function finished<T>(run: Generator<Progress, T>): T {
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
  }
}
const answered = (source: string, { question }: Asked): readonly Finding[] =>
  finished(answerAsked(source, question, means)) ?? [];

describe('a question', () => {
  const source = `${head}audit degeneracy ising [flip = +1] on 8, 10\naudit map missing\naudit laws flip`;

  it('has the same name wherever it stands, and another one where anything is asked otherwise', () => {
    const [small, large] = askedIn(source);
    expect([small?.size, large?.size, small?.line]).toEqual(['8', '10', 6]);
    const moved = askedIn(`# further down\n\n${head}audit degeneracy ising [flip = +1] on 10`);
    expect(moved.map(({ question }) => question)).toEqual([large?.question]);
    for (const [before, after] of [
      ['h = 0.6', 'h = 0.7'],
      ['torus', 'open'],
      ['[flip = +1]', '[flip = -1]'],
    ] as const) {
      const other = askedIn(source.replace(before, after)).map(({ question }) => question);
      expect(other).not.toContain(small?.question);
      expect(other).not.toContain(large?.question);
    }
  });

  it('is answered elsewhere as it is here, and its answer can be carried as plain data', () => {
    const here = newDerivation().derive(source);
    const answers = Object.fromEntries(
      askedIn(source).map((asked) => [asked.question, plain(answered(source, asked))]),
    );
    const told = newDerivation({ limit: { operations: 1e6, bytes: 1e6 } });
    const before = told.derive(source);
    const open = before.claims.filter(({ audit }) => audit === 'degeneracy');
    expect(open.map(({ grade }) => grade)).toEqual(['open', 'open']);
    expect(open.map(({ question }) => question)).toEqual(askedIn(source).map(({ question }) => question));
    told.learn(answers);
    expect(plain(told.derive(source))).toEqual(plain(here));
    expect(here.claims.some((claim) => 'question' in claim)).toBe(false);
  });

  it('that was answered here can be given to others; what stands open cannot', () => {
    const one = newDerivation();
    one.derive(source);
    const found = one.found();
    expect(Object.keys(found)).toEqual(askedIn(source).map(({ question }) => question));
    const poor = newDerivation({ limit: { operations: 1e6, bytes: 1e6 } });
    poor.derive(source);
    expect(poor.found()).toEqual({});
  });

  it('that nobody asks in the source has no answer', () => {
    expect(finished(answerAsked(source, '0'.repeat(64), means))).toBeNull();
  });

  it('stands open with its reason when the time is over', () => {
    let asked = 0;
    const report = newDerivation({ late: () => (asked += 1) > 3 }).derive(source);
    const last = report.claims.filter(({ audit }) => audit === 'degeneracy').at(-1);
    expect([last?.grade, last?.cautions]).toEqual(['open', ['not reached in the time that this evaluation had']]);
  });
});

describe('a choice of questions', () => {
  const source = `${head}audit degeneracy ising [flip = +1] on 4\naudit commute ising with flip\naudit laws flip`;
  const audits = (choice: { only?: readonly string[]; sizes?: string }) =>
    newDerivation({ choice })
      .derive(source)
      .claims.map(({ audit, figures }) => [audit, figures['size'] ?? null]);

  it('asks some audits only, on the sizes that it names', () => {
    expect(audits({ only: ['commute'] })).toEqual([['commute', null]]);
    expect(audits({ only: ['degeneracy', 'laws'], sizes: '5, 7' })).toEqual([
      ['degeneracy', '5'],
      ['degeneracy', '7'],
      ['laws', '5'],
      ['laws', '7'],
    ]);
  });

  it.each(['', '3 x 3', '0', 'wide', '4 levels 3'])('refuses %j as sizes of a chain', (sizes) => {
    expect(() => newDerivation({ choice: { sizes } }).derive(source)).toThrow(WrongSizes);
  });
});

describe('a scan that was broken off', () => {
  it.each(['gap', 'overlap', 'energy'])('goes on from any checkpoint to the same figures of the %s', (quantity) => {
    const source = `${head}audit scan ${quantity} of ising [flip = +1] over h = 0.4 .. 1.6 by 0.2, J = 1 .. 1.5 by 0.5 on 5`;
    const single = `${head}audit scan ${quantity} of ising over h = 0.4 .. 1.6 by 0.2 on 4`;
    for (const text of [source, single]) {
      const [asked] = askedIn(text);
      if (!asked) throw new Error('the scan asks nothing');
      const whole = plain(answered(text, asked));
      const checkpoints: unknown[] = [];
      const run = answerAsked(text, asked.question, means);
      for (let step = run.next(); !step.done; step = run.next()) {
        expect(step.value.done).toBeGreaterThanOrEqual(0);
        expect(step.value.done).toBeLessThanOrEqual(1);
        if (step.value.checkpoint !== undefined) checkpoints.push(plain(step.value.checkpoint));
      }
      expect(checkpoints.length).toBeGreaterThanOrEqual(6);
      const count = (from: unknown): number => {
        const again = answerAsked(text, asked.question, { ...means, from });
        for (let steps = 0; ; steps++) {
          const step = again.next();
          if (!step.done) continue;
          const [finding] = plain(step.value ?? []);
          expect(finding?.statement).toBe(whole[0]?.statement);
          expect(finding?.figures).toEqual(whole[0]?.figures);
          return steps;
        }
      };
      const all = count(undefined);
      const rest = checkpoints.map(count);
      // What was measured is not measured again.
      expect(rest.at(-1)).toBeLessThan(all / 2);
    }
  });
});
