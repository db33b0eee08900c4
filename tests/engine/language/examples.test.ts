import { readFileSync, readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { countParses } from '../../../shared/language/parse.ts';
import { evaluateSource } from '../../../shared/language/evaluate.ts';
import { layoutOf } from '../../../shared/language/source.ts';
import { buildMap } from '../../../shared/maps/registry.ts';

const folder = new URL('../../examples/', import.meta.url);
const examples = readdirSync(folder).filter((name) => name.endsWith('.gw'));

describe('examples', () => {
  it('are there', () => {
    expect(examples.length).toBeGreaterThanOrEqual(9);
  });
  it.each(examples)('%s: every statement has exactly one parse', (name) => {
    const { statements, problems } = layoutOf(readFileSync(new URL(name, folder), 'utf8'));
    expect(problems).toEqual([]);
    expect(statements.length).toBeGreaterThan(3);
    for (const layout of statements) expect([layout.text, countParses(layout)]).toEqual([layout.text, 1]);
  });
  it.each(examples)('%s: is evaluated without a problem', (name) => {
    const program = evaluateSource(readFileSync(new URL(name, folder), 'utf8'), { buildMap });
    // a kind of map that does not stand yet refuses by name; everything of this folder must stand
    expect(program.problems).toEqual([]);
    expect(program.statements.every((s) => s.ok)).toBe(true);
  });
});
