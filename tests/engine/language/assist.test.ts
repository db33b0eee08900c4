import { describe, expect, it } from 'vitest';
import type { Completion, Edit, TextPosition as Position } from '../../../shared/contracts/assist.ts';
import { completions, declaration, hover, rename, writeOut } from '../../../shared/language/assist.ts';
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
  const options = (text: string): readonly Completion[] => {
    const whole = source + text;
    const lines = whole.split('\n');
    return completions(run(whole), { line: lines.length, column: (lines.at(-1) ?? '').length + 1 }).options;
  };
  const labels = (text: string): string[] => options(text).map((o) => o.label);
  it('knows where it is', () => {
    expect(labels('mo')).toEqual(['model']);
    expect(labels('audit sp')).toEqual(['spectrum']);
    expect(labels('lattice k')).toEqual(['kagome']);
    expect(labels('model a = s^')).toEqual(['x', 'y', 'z', 'n', '+', '-']);
    expect(labels('model a = sum(v: ver')).toEqual(['vertices']);
    expect(labels('model a = sum(vert: vertices) s^x[ve')).toEqual(['vert', 'vertices']);
    expect(labels('audit commute ga')).toEqual(['gauge']);
  });
  it('knows what an argument may be', () => {
    expect(labels('model a = sum(l: links) s^z[l')).toEqual(['l.a', 'l.b']);
    expect(labels('model a = sum(l: links) σ^z[l')).toEqual(['l', 'links.1']);
    expect(labels('model a = sum(p: plaquettes) prod(l: rim(')).toEqual(['p', 'plaquettes']);
    expect(labels('model a =\n  sum(v: vertices)\n  star(')).toEqual(['v', 'vertices']);
    expect(labels('model a = sum(p: plaquettes) σ^z[p.')).toEqual(['1', '2', '3', '4', 'x', 'y']);
    expect(labels('model a = sum(v: vertices) s^x[v] + sum(u: vertices where u.x + 1 == 2) s^z[')).toEqual([
      'u',
      'vertices',
    ]);
    expect(labels('law K(q: plaquettes) = (prod(l: rim(q)) σ^z[l]) prod(v: corners(')).toEqual([
      'q',
      'plaquettes',
      'cubes',
    ]);
    expect(labels('spins t on links.')).toEqual(['1', '2']);
  });
  it('writes functions and families with their argument', () => {
    const template = (text: string, label: string) => options(text).find((o) => o.label === label)?.template;
    expect(template('model a = sum(u: vertices) prod(l: st', 'star')).toBe('star(${u})');
    expect(template('model a = sum(u: vertices) st', 'star')).toBe('star(${u})');
    expect(template('model a = sum(l: links) ', 's')).toBe('s^${x}[${l.a}]');
    expect(template('model a = 2 su', 'sum')).toBe('sum(${v}: ${vertices}) ');
  });
  it('knows the parts of an audit', () => {
    expect(labels('audit commute gauge with ')).toEqual(['star', 'gauge', 'with']);
    expect(labels('audit spectrum gauge [')).toEqual(['star', 'map']);
    expect(labels('audit scan gap of gauge over ')).toEqual(['h']);
    expect(labels('audit scan ga')).toEqual(['gauge', 'gap']);
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

describe('writing out', () => {
  it('puts the terms of a model in place of its statement', () => {
    const [edit] = writeOut(program, at(6, 'gauge')) as readonly Edit[];
    expect(edit?.place).toEqual({ line: 6, column: 1, length: `${lines[5] ?? ''}\n${lines[6] ?? ''}`.length });
    const next = run([...lines.slice(0, 5), edit?.text, ...lines.slice(7)].join('\n'));
    expect(next.problems).toEqual([]);
    expect(linesOf(next, 'gauge')).toEqual(linesOf(program, 'gauge'));
  });
  it('is refused elsewhere', () => {
    expect(writeOut(program, at(10, 'gauge'))).toMatchObject({ code: 'written-out' });
    expect(writeOut(program, at(4, 'h'))).toMatchObject({ code: 'written-out' });
  });
});
