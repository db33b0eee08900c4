import { describe, expect, it } from 'vitest';
import { statementKeywords } from '../../../grammar/words.ts';
import { auditForms } from '../../../shared/language/forms.ts';
import { exampleSource, helpOn, reference } from '../../../shared/language/reference.ts';
import { run } from './support.ts';

describe('help', () => {
  it.each(reference.map((r) => [r.topic, r.name, r] as const))('%s %s: its example runs', (_, __, record) => {
    expect(record.help).toMatch(/^\S.*[.?]$/u);
    expect(record.example).toContain(record.name.replace(/^1i$/u, '1i'));
    const program = run(exampleSource(record));
    expect(program.problems).toEqual([]);
    expect(program.statements.length).toBeGreaterThan(0);
  });
  it('speaks of every statement and every audit', () => {
    for (const word of statementKeywords) expect(helpOn(word, 'statement')?.name).toBe(word);
    for (const form of auditForms) expect(helpOn(form.name, 'audit')?.help).toBe(form.help);
  });
});
