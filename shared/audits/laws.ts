import { StabilizerGroup, type Relation } from '../algebra/finite/group.ts';
import { isHermitian, turned } from '../algebra/finite/string.ts';
import { siteTable } from '../algebra/finite/wrap.ts';
import type { SiteTable } from '../algebra/finite/types.ts';
import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import type { LawValue, SymmetryValue, Values } from '../language/values.ts';
import { newBudget } from '../limits.ts';
import { sizeText, type Cluster } from '../lattice/cluster.ts';
import type { Size } from '../lattice/cells.ts';
import { stringPhrase } from '../maps/phrases.ts';
import type { Audit, Finding, Question } from './audit.ts';
import { failureFinding, openFinding, pauliFactors, sizesOf } from './numeric.ts';
import { commutePieces, piecesOf, sizesWords, type Piece } from './pieces.ts';
import { cheap, keyOf } from './question.ts';
import { clusterOf, lawConstraints, speciesCells, symmetryConstraint, type SectorConstraint } from './sector.ts';

const source =
  'Independent generators, relations and logical operators by elimination over F2: D. Gottesman, Stabilizer Codes and Quantum Error Correction, thesis, Caltech (1997), arXiv:quant-ph/9705052.';

/** Relations listed one by one; their number is never cut. */
const listed = 12;

type LawLike = LawValue | SymmetryValue;

interface Mutual {
  readonly proofs: readonly AllSizes[];
  /** True if every pair commutes on the infinite lattice, so at every size. */
  readonly proved: boolean;
  /** Words of the first pair that does not, on the infinite lattice. */
  readonly witness: Record<string, unknown> | undefined;
}

/** Mutual commutation of all pieces on the infinite lattice. */
function mutual(pieces: readonly Piece[], values: Values): Mutual {
  const budget = newBudget();
  const proofs: AllSizes[] = [];
  let proved = true;
  const family = values.lattice?.family;
  for (const [k, a] of pieces.entries())
    for (const b of pieces.slice(k)) {
      const verdict = commutePieces(a, b, budget);
      if (verdict.commutes === true) {
        proofs.push(verdict.evidence);
        continue;
      }
      proved = false;
      const witness = verdict.commutes === false ? verdict.witnesses[0] : undefined;
      if (!witness || !family) continue;
      const [left, right] = [witness.left, witness.right].map((s) => stringPhrase({ ...s, phase: 0 }, family));
      const words = `${a.name}, ${left ?? ''}, anticommutes with ${b.name}, ${right ?? ''}: they differ on ${String(witness.overlap.length)} spins`;
      return {
        proofs,
        proved,
        witness: {
          laws: [a.name, b.name],
          shift: witness.shift,
          left: witness.left.factors,
          right: witness.right.factors,
          overlap: witness.overlap,
          words,
        },
      };
    }
  return { proofs, proved, witness: undefined };
}

/** All instances of the named laws and symmetries on one cluster, each with its declared value as sign. */
interface Instances {
  readonly cluster: Cluster;
  readonly table: SiteTable;
  readonly all: readonly SectorConstraint[];
}

function instances(values: Values, laws: readonly LawLike[], size: Size): Instances {
  const cluster = clusterOf(values, size);
  const names = new Set<string>();
  for (const piece of laws.flatMap((law) => piecesOf(law) ?? [])) {
    const strings = piece.kind === 'orbit' ? [piece.orbit.string] : piece.extended.parts.map((part) => part.string);
    for (const string of strings) for (const factor of string.factors) names.add(factor.species);
  }
  const table = siteTable(cluster, speciesCells(values, names));
  const all = laws.flatMap((law) =>
    law.what === 'law' ? lawConstraints(cluster, table, law) : [symmetryConstraint(cluster, table, law)],
  );
  return { cluster, table, all };
}

/** A relation in words: which laws, how many of each, and the sign of their product with the declared values. */
function relationWords(
  relation: Relation,
  all: readonly SectorConstraint[],
  totals: ReadonlyMap<string, number>,
): string {
  const counts = new Map<string, number>();
  for (const member of relation.members) {
    const label = all[member]?.label ?? '';
    counts.set(label, (counts.get(label) ?? 0) + 1);
  }
  const words = [...counts].map(([label, count]) =>
    count === totals.get(label) ? `all ${label}` : `${String(count)} of ${label}`,
  );
  return `${words.join(' times ')} = ${relation.phase === 0 ? '+1' : relation.phase === 2 ? '-1' : `i^${String(relation.phase)}`}`;
}

/** A product of law instances written out, for a sector that holds no state. */
function contradictionWords(relation: Relation, { all, table }: Instances, values: Values): string {
  const family = values.lattice?.family;
  if (!family) return '';
  const shown = relation.members.slice(0, 4).flatMap((member) => {
    const constraint = all[member];
    if (!constraint) return [];
    const factors = pauliFactors(constraint.string).flatMap(({ spin, pauli }) => {
      const site = table.sites[spin];
      return site ? [{ ...site, pauli }] : [];
    });
    return [
      `${constraint.label}: ${stringPhrase({ phase: 0, factors }, family)} = ${constraint.value === 1 ? '+1' : '-1'}`,
    ];
  });
  const more = relation.members.length - shown.length;
  return `${shown.join('; ')}${more > 0 ? `; and ${String(more)} more` : ''}`;
}

function count(words: string, values: Values, laws: readonly LawLike[], together: Mutual, size: Size): Finding {
  const found = instances(values, laws, size);
  const { all, table } = found;
  const at = sizeText(size);
  const strings = all.map(({ string, value }) => turned(string, value === -1 ? 2 : 0));
  const group = new StabilizerGroup(table.sites.length, strings);
  const { rank } = group;
  const relations = group.relations();
  const odd = all.find(({ string }) => !isHermitian(string));
  const totals = new Map<string, number>();
  for (const { label } of all) totals.set(label, (totals.get(label) ?? 0) + 1);
  const relationList = relations.slice(0, listed).map((relation) => relationWords(relation, all, totals));
  const spins = table.sites.length;
  const figures = {
    size: at,
    spins,
    instances: all.length,
    independent: rank,
    relations: relations.length,
    relationList,
  };
  const pair = group.anticommutingPair();
  if (pair) {
    const labels = pair.map((k) => all[k]?.label ?? '');
    const wrapped = `${labels.join(' and ')} anticommute on ${at}`;
    return {
      evidence: { kind: 'counterexample' },
      statement: `${words} do not commute with one another on ${at}`,
      figures: { commute: false, consistent: false, ...figures },
      witness: together.witness ?? { laws: labels, words: wrapped },
      sources: [source],
    };
  }
  const contradiction = group.contradiction();
  const consistent = !contradiction && !odd;
  const dimension = `2^${String(spins - rank)}`;
  const proof = together.proved ? `they commute at ${sizesWords(together.proofs)}` : `they commute on ${at}`;
  const cautions = [
    ...(together.proved
      ? []
      : [
          `On the infinite lattice not all of them commute${typeof together.witness?.['words'] === 'string' ? `: ${together.witness['words']}` : ''}; what holds here is of this size only.`,
        ]),
    ...(odd ? [`${odd.label} is not Hermitian on ${at}: factors that anticommute meet on one spin.`] : []),
  ];
  const what = `${words}: ${proof}; ${String(rank)} independent of ${String(all.length)} on ${at}, ${String(relations.length)} relations`;
  return {
    evidence: consistent ? { kind: 'exact on', sizes: [at] } : { kind: 'counterexample' },
    statement: consistent
      ? `${what}, a sector of dimension ${dimension} (${String(spins - rank)} logical spins)`
      : `${what}, and no state obeys them all: -1 is in the group they generate`,
    figures: { commute: true, consistent, ...figures, logical: spins - rank, dimension },
    ...(contradiction
      ? { witness: { members: contradiction.members, words: contradictionWords(contradiction, found, values) } }
      : {}),
    cautions,
    sources: [source],
  };
}

function decide({ statement, values, size }: Question): readonly Finding[] {
  const named = statement.subjects.map((subject) => values.find(subject.name));
  const laws = named.filter((value) => value?.what === 'law' || value?.what === 'symmetry');
  const words = statement.subjects.map((subject) => subject.name).join(', ');
  if (laws.length < named.length || !size) return [openFinding(words, 'not all of these are laws or symmetries')];
  try {
    const together = mutual(
      laws.flatMap((law) => piecesOf(law) ?? []),
      values,
    );
    return [count(words, values, laws, together, size)];
  } catch (error) {
    return [failureFinding(`${words} on ${sizeText(size)}`, values, error)];
  }
}

export const laws: Audit = {
  name: 'laws',
  help: 'Do laws commute with one another, how many are independent, which relations hold among them, and how many states are left? One claim for each size.',
  example: 'audit laws A, B on 3 x 3',
  questions: (statement, values) =>
    sizesOf(statement.sizes, values).map((size) => ({
      audit: 'laws',
      statement,
      values,
      size,
      part: '',
      key: keyOf(statement, values, '', [], size),
    })),
  cost: () => cheap,
  // eslint-disable-next-line require-yield -- exact arithmetic over F2, answered in one go
  *decide(question) {
    return decide(question);
  },
};
