import { describe, expect, it } from 'vitest';
import type { Claim, Grade } from '../../shared/contracts/report.ts';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { chapters } from '../../src/features/guide/chapters.ts';
import { beginnings } from '../../src/features/shelf/beginnings.ts';

const examples = chapters.flatMap(({ title, sections }) =>
  sections.flatMap(({ heading, example }) =>
    example === undefined ? [] : [[`${title}: ${heading}`, example] as const],
  ),
);
const grades = (claims: readonly Claim[]): readonly Grade[] => claims.map((claim) => claim.grade);

describe('the guide', () => {
  it('has chapters of different names, each with something to read', () => {
    expect(new Set(chapters.map((one) => one.name)).size).toBe(chapters.length);
    for (const { sections } of chapters) for (const { prose } of sections) expect(prose.length).toBeGreaterThan(80);
  });

  it.each(examples)('the example of “%s” runs, and refutes only what the guide calls wrong', (name, example) => {
    const { problems, claims } = newDerivation().derive(example);
    expect(problems.filter((problem) => problem.severity === 'error')).toEqual([]);
    expect(grades(claims)).not.toContain('open');
    if (/^audit/mu.test(example)) expect(claims.length).toBeGreaterThan(0);
    const wrong = ['Ask whether it holds: Commutation', 'What the grades mean: What commutation does not say'];
    expect(grades(claims).filter((grade) => grade === 'refuted')).toHaveLength(wrong.includes(name) ? 1 : 0);
  });
});

describe('the beginnings of a notebook', () => {
  it.each(beginnings.map((one) => [one.want, one] as const))('“%s” gives claims that hold', (_, { source }) => {
    const { problems, claims } = newDerivation().derive(source);
    expect(problems.filter((problem) => problem.severity === 'error')).toEqual([]);
    expect(claims.length).toBeGreaterThan(0);
    for (const grade of grades(claims)) expect(['proved', 'exact', 'numerical']).toContain(grade);
  });
});
