import type { Operator } from '../../../shared/algebra/pauli/types.ts';
import { evaluateSource, type Program } from '../../../shared/language/evaluate.ts';
import { buildMap } from '../../../shared/maps/registry.ts';
import type { LocalString } from '../../../shared/algebra/pauli/types.ts';

export const run = (source: string, previous?: Program): Program => evaluateSource(source, { buildMap }, previous);

/** `s^x v0(0,0)` as "sx(0,0)"; classes after the first as "gx.1(0,0)"; optional factors end in "?". */
export const stringText = (s: LocalString): string =>
  `${['', 'i ', '-', '-i '][s.phase] ?? ''}${
    s.factors
      .map((f) => {
        const index = f.cell.index > 0 ? `.${f.cell.index}` : '';
        return `${f.species}${f.pauli}${index}(${f.cell.offset.join(',')})${f.optional ? '?' : ''}`;
      })
      .join(' ') || '1'
  }`;

/** An operator as lines "coefficient string ~ steps", sorted. */
export const operatorLines = (o: Operator): string[] =>
  [
    ...o.families.map((f) => `${f.coefficient.toText()} ${stringText(f.string)} ~ ${f.steps.join(',')}`),
    ...o.extended.map(
      (t) =>
        `${t.coefficient.toText()} prod ${t.extended.parts.map((p) => `${stringText(p.string)} ~ ${p.steps.join(',')}`).join('; ')}`,
    ),
  ].sort();

/** The lines of a declared model or operator. */
export function linesOf(program: Program, name: string): string[] {
  const value = program.values.find(name);
  if (value?.what !== 'model' && value?.what !== 'operator') throw new Error(`${name} is no operator`);
  return operatorLines(value.operator);
}

const square = 'lattice square torus 4 x 4\nspins s on vertices\nspins g on links\ncouplings J = 1, K\n';
/** The operator that an expression stands for on a square torus, with the codes of its problems. */
export function expression(text: string, prelude = square): { lines: string[]; codes: string[] } {
  const program = run(`${prelude}operator O = ${text}\n`);
  const codes = program.problems.map((p) => p.code);
  return { lines: program.values.find('O') ? linesOf(program, 'O') : [], codes };
}

/** Two expressions stand for one operator. */
export const same = (a: string, b: string, prelude = square): boolean => {
  const [left, right] = [expression(a, prelude), expression(b, prelude)];
  if (left.codes.length + right.codes.length > 0) throw new Error([...left.codes, ...right.codes].join(' '));
  return JSON.stringify(left.lines) === JSON.stringify(right.lines);
};
