import { describe, expect, it } from 'vitest';
import { layoutOf } from '../../../shared/language/source.ts';
import { joinEntries } from '../../../shared/notebook/text.ts';

describe('layout', () => {
  it('goes on over blank and comment lines', () => {
    const { statements, problems } = layoutOf('model m =\n\n# a word\n  - s^x[v]\n');
    expect(problems).toEqual([]);
    expect(statements).toMatchObject([{ line: 1, lines: 4, keyword: 'model' }]);
  });

  it('ends a statement with its entry', () => {
    const { text, lines } = joinEntries([
      { kind: 'statements', text: 'couplings J = 1' },
      { kind: 'statements', text: '  , h = 2' },
      { kind: 'prose', text: 'Then:' },
      { kind: 'statements', text: 'couplings K' },
    ]);
    const { statements, problems } = layoutOf(text);
    expect(statements.map((statement) => [statement.line, statement.lines])).toEqual([
      [lines[0]?.first, 1],
      [lines[3]?.first, 1],
    ]);
    expect(problems.map((problem) => problem.line)).toEqual([lines[1]?.first]);
  });
});
