import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import { commutesAt, type SizeParity, type Witness } from '../algebra/pauli/commutation.ts';
import { extendedPhrase, stringPhrase } from '../maps/phrases.ts';
import { newBudget } from '../limits.ts';
import { isStraight, sizeText } from '../lattice/cluster.ts';
import type { LatticeFamily } from '../lattice/cells.ts';
import type { Values } from '../language/values.ts';
import type { Audit, Finding, Question } from './audit.ts';
import { boundaryPairs, smallTori } from './small-sizes.ts';
import { commutePieces, piecesOf, sizesWords, type Piece } from './pieces.ts';
import { keepsRule } from './keeps-rule.ts';
import { cheap, keyOf } from './question.ts';

const source =
  'All sizes at once by the symplectic product of Laurent polynomials: J. Haah, Commun. Math. Phys. 324, 351 (2013).';

/** One cell of the commutation table. */
interface Mark {
  readonly term: number;
  readonly law: string;
  readonly holds: boolean;
  /** True where it holds at the declared size by the parity of that size, not at every size. */
  readonly atSize?: true;
  /** Where it fails: the two strings that anticommute and the spins where they differ. */
  readonly witness?: Record<string, unknown>;
}

interface Failure {
  readonly term: number;
  readonly law: Piece;
  readonly witness: Witness | undefined;
  readonly depends: readonly SizeParity[] | undefined;
}

const pieceText = (piece: Piece, family: LatticeFamily): string =>
  piece.kind === 'orbit'
    ? stringPhrase({ ...piece.orbit.string, phase: 0 }, family)
    : extendedPhrase(piece.extended, family);

/** The witness as data and in one sentence. */
function witnessOf(failure: Failure, family: LatticeFamily): Record<string, unknown> {
  const { witness, law } = failure;
  if (!witness) return { law: law.name, term: failure.term, words: `the overlap with ${law.name} is odd` };
  const left = stringPhrase({ ...witness.left, phase: 0 }, family);
  const right = stringPhrase({ ...witness.right, phase: 0 }, family);
  const count = witness.overlap.length;
  const where = witness.overlap.map((site) =>
    stringPhrase({ phase: 0, factors: [{ ...site, pauli: 'z' }] }, family).replace('^z', ''),
  );
  return {
    term: failure.term,
    law: law.name,
    shift: witness.shift,
    left: { text: left, string: witness.left.factors },
    right: { text: right, string: witness.right.factors },
    overlap: witness.overlap.map((site) => ({ species: site.species, cell: site.cell })),
    words: `${left} anticommutes with ${law.name}, ${right}: they differ on ${count === 1 ? 'one spin' : `${String(count)} spins`}, ${where.join(', ')}`,
  };
}

/** The verdicts of all pairs: proofs of those that commute, failures of the others, and the table. */
interface Comparison {
  readonly proofs: AllSizes[];
  readonly failures: Failure[];
  readonly table: Mark[];
  /** True if a pair commutes at the declared size only by the parity of that size. */
  byParity: boolean;
}

/** Settles a verdict that depends on the size at the declared one; tilted sizes are not settled this way. */
function commutesHere(on: readonly SizeParity[], values: Values): boolean {
  const size = values.lattice?.size;
  return (
    size !== undefined &&
    isStraight(size) &&
    commutesAt(
      on,
      size.periods.map((row, d) => row[d] ?? 1),
    )
  );
}

function compare(
  terms: readonly Piece[],
  laws: ReadonlyMap<string, readonly Piece[]>,
  values: Values,
  family: LatticeFamily,
): Comparison {
  const budget = newBudget();
  const all: Comparison = { proofs: [], failures: [], table: [], byParity: false };
  terms.forEach((term, k) => {
    for (const [name, pieces] of laws) {
      const before = all.failures.length;
      let atSize = false;
      for (const law of pieces) {
        const verdict = commutePieces(term, law, budget);
        if (verdict.commutes === true) all.proofs.push(verdict.evidence);
        else if (verdict.commutes === false)
          all.failures.push({ term: k, law, witness: verdict.witnesses[0], depends: undefined });
        else if (commutesHere(verdict.on, values)) atSize = true;
        else all.failures.push({ term: k, law, witness: undefined, depends: verdict.on });
      }
      const failure = all.failures[before];
      const mark = { term: k, law: name, holds: failure === undefined };
      all.byParity ||= atSize;
      if (failure) all.table.push({ ...mark, witness: witnessOf(failure, family) });
      else all.table.push(atSize ? { ...mark, atSize } : mark);
    }
  });
  return all;
}

function decide(question: Question): readonly Finding[] {
  const { statement, values } = question;
  const lattice = values.lattice;
  const [subject] = statement.subjects;
  const terms = piecesOf(values.find(subject?.name ?? ''));
  if (!lattice || !subject || !terms) {
    return [open(statement.text, `${subject?.name ?? 'the subject'} is not a model, operator, law or symmetry`)];
  }
  const named = statement.withNames.map((name) => values.find(name));
  const rules = named.filter((value) => value?.what === 'rule');
  const laws = new Map(
    named.flatMap((value, k) => {
      const pieces = piecesOf(value);
      return pieces ? [[statement.withNames[k] ?? '', pieces] as const] : [];
    }),
  );
  const findings: Finding[] = [];
  if (laws.size > 0 || rules.length === 0) {
    findings.push(commutation(subject.name, terms, laws, values, lattice.family));
  }
  for (const rule of rules) findings.push(keepsRule(subject.name, rule, values, rules));
  return findings;
}

function commutation(
  name: string,
  terms: readonly Piece[],
  laws: ReadonlyMap<string, readonly Piece[]>,
  values: Values,
  family: LatticeFamily,
): Finding {
  const { proofs, failures, table, byParity } = compare(terms, laws, values, family);
  const failing = new Set(failures.map((failure) => failure.term));
  const figures = { terms: terms.length, commuting: terms.length - failing.size, table };
  const list = [...laws.keys()].join(', ');
  const [first] = failures;
  if (first) {
    const term = terms[first.term];
    const text = term ? pieceText(term, family) : '';
    return {
      evidence: { kind: 'counterexample' },
      statement: `${name} does not commute with ${list}: ${String(failing.size)} of ${String(terms.length)} terms fail, the first is ${text}`,
      figures,
      witness: witnessOf(first, family),
      cautions: smallTori(
        failures.map((f) => ({ term: terms[f.term], law: f.law })),
        values,
      ),
      sources: [source],
    };
  }
  const edge = boundaryPairs(terms, [...laws.values()].flat(), values);
  if (edge.failure) {
    return {
      evidence: { kind: 'counterexample' },
      statement: `${name} commutes with ${list} in the bulk, but not at the open boundary`,
      figures: { ...figures, commuting: figures.terms - edge.failure.terms },
      witness: edge.failure.witness,
      sources: [source],
    };
  }
  if (byParity && values.lattice) {
    const size = sizeText(values.lattice.size);
    return {
      evidence: { kind: 'exact on', sizes: [size] },
      statement: `every term of ${name} commutes with ${list} on ${size}; whether it does depends on the parity of the size`,
      figures,
      sources: [source],
    };
  }
  return {
    evidence: { kind: 'all sizes', proof: proofs },
    statement: `every term of ${name} commutes with ${list}, on ${sizesWords(proofs)}${edge.words}`,
    figures,
    cautions: edge.cautions,
    sources: [source],
  };
}

const open = (statement: string, reason: string): Finding => ({
  evidence: { kind: 'reason', reason },
  statement,
  figures: {},
});

export const commute: Audit = {
  name: 'commute',
  help: 'Does every term of a model commute with the laws? Term by term, for every lattice size; on open lattices also at the boundary. With a rule: does the model keep it.',
  example: 'audit commute gauge with flat',
  questions: (statement, values) => [
    { audit: 'commute', statement, values, size: undefined, part: '', key: keyOf(statement, values, '') },
  ],
  cost: () => cheap,
  // eslint-disable-next-line require-yield -- symbolic: answered in one go
  *decide(question) {
    return decide(question);
  },
};
