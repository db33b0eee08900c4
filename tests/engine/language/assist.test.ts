import { describe, expect, it } from 'vitest';
import { completions, declaration, hover, rename, type Edit, type Position } from '../../../shared/language/assist.ts';
import { linesOf, run } from './support.ts';

const source = `lattice square torus 4 x 4
spins s on vertices
spins σ on links
couplings h = 1
law star(v: vertices) = prod(l: star(v)) σ^x[l]
model gauge = h sum(v: vertices) star(v)
  + h sum(l: links) s^z[l.a] s^z[l.b]
map map = circuit
  s s[v] for v: vertices
audit commute gauge with star
`;
const program = run(source);
const lines = source.split('\n');
/** Position of the n-th occurrence of a piece of text, at its first character. */
function at(line: number, piece: string, skip = 0): Position {
  let column = 0;
  for (let k = 0; k <= skip; k++) column = (lines[line - 1] ?? '').indexOf(piece, column) + 1;
  return { line, column };
}
function applied(edits: readonly Edit[]): string {
  const out = [...lines];
  for (const { place, text } of [...edits].reverse()) {
    const line = out[place.line - 1] ?? '';
    out[place.line - 1] = line.slice(0, place.column - 1) + text + line.slice(place.column - 1 + place.length);
  }
  return out.join('\n');
}
function renamed(position: Position, to: string): string {
  const edits = rename(program, position, to);
  if ('code' in edits) throw new Error(edits.message);
  return applied(edits);
}

describe('declaration', () => {
  it('finds declared names, in every spelling, and bound cells', () => {
    expect(declaration(program, at(6, 'h '))).toMatchObject({ line: 4, column: 11 });
    expect(declaration(program, at(5, 'σ'))).toMatchObject({ line: 3, column: 7 });
    expect(declaration(program, at(7, 'l.b'))).toMatchObject({ line: 7, column: 11 });
    expect(declaration(program, at(1, 'square'))).toBeUndefined();
  });
});

describe('hover', () => {
  it('says what a word is', () => {
    expect(hover(program, at(6, 'h '))?.title).toBe('h: a coupling');
    expect(hover(program, at(7, 'l.a'))?.text).toBe('A cell of links.');
    expect(hover(program, at(7, 'z['))?.title).toBe('^z');
    expect(hover(program, at(10, 'commute'))?.title).toBe('commute');
    expect(hover(program, at(8, 'map'))?.title).toBe('map');
    expect(hover(program, { line: 2, column: 200 })).toBeUndefined();
  });
});

describe('completion', () => {
  const labels = (text: string): string[] => {
    const whole = source + text;
    const line = whole.split('\n').length;
    return completions(run(whole), { line, column: text.length + 1 }).options.map((o) => o.label);
  };
  it('knows where it is', () => {
    expect(labels('mo')).toEqual(['model']);
    expect(labels('audit sp')).toEqual(['spectrum']);
    expect(labels('lattice k')).toEqual(['kagome']);
    expect(labels('model a = s^')).toEqual(['x', 'y', 'z', 'n', '+', '-']);
    expect(labels('model a = sum(v: ver')).toEqual(['vertices']);
    expect(labels('model a = sum(vert: vertices) s^x[ve')).toEqual(['vert', 'vertices']);
    expect(labels('audit commute ga')).toEqual(['gauge']);
  });
});

describe('rename', () => {
  it('changes a name where it is the name, and nowhere else', () => {
    const next = renamed(at(2, 's on'), 'spin');
    const meant = lines
      .join('\n')
      .replace('spins s on', 'spins spin on')
      .replaceAll('s^z[', 'spin^z[')
      .replace('s s[v]', 's spin[v]');
    expect(next).toBe(meant);
    const law = renamed(at(5, 'star'), 'G').split('\n');
    expect(law[4]).toBe('law G(v: vertices) = prod(l: star(v)) σ^x[l]');
    expect(law[5]).toBe('model gauge = h sum(v: vertices) G(v)');
    expect(law[9]).toBe('audit commute gauge with G');
  });
  it('changes a bound cell in its own sum', () => {
    const next = renamed(at(7, 'l.a'), 'k').split('\n');
    expect(next[6]).toBe('  + h sum(k: links) s^z[k.a] s^z[k.b]');
    expect(next[4]).toBe(lines[4]);
  });
  it('leaves the meaning as it is', () => {
    const next = run(renamed(at(3, 'σ'), 'link'));
    expect(next.problems).toEqual([]);
    const kept = (l: string): string => l.replaceAll('sigma', 'link');
    expect(linesOf(next, 'gauge').sort()).toEqual(linesOf(program, 'gauge').map(kept).sort());
  });
  it('refuses names that are taken, reserved or would be hidden', () => {
    expect(rename(program, at(4, 'h'), 's')).toMatchObject({ code: 'declared-twice' });
    expect(rename(program, at(4, 'h'), 'sum')).toMatchObject({ code: 'reserved' });
    expect(rename(program, at(4, 'h'), 'v')).toMatchObject({ code: 'hides' });
    expect(rename(program, at(4, 'h'), '2x')).toMatchObject({ code: 'character' });
  });
});
