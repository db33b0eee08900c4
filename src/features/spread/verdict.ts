import type { Claim, Grade } from '../../../shared/contracts/report.ts';
import type { NamedModel } from '../../reading/slices.ts';
import type { Mark, Term } from './row.ts';

/** From strongest to weakest; a pair shows the weakest of what is claimed of it, and a refutation before all. */
const order: readonly Grade[] = ['refuted', 'open', 'numerical', 'exact', 'proved'];
const weakest = (grades: readonly Grade[]): Grade | undefined => order.find((grade) => grades.includes(grade));

/** A row of the table of a commutation audit: does this term (by its piece) keep this law? */
interface TableRow {
  readonly term: number;
  readonly law: string;
  readonly holds: boolean;
}

function tableOf(claim: Claim): readonly TableRow[] {
  const { table } = claim.figures;
  if (!Array.isArray(table)) return [];
  return table.filter(
    (row: unknown): row is TableRow =>
      typeof row === 'object' && row !== null && 'term' in row && 'holds' in row && typeof row.holds === 'boolean',
  );
}

/** What the commutation audits of a model say of one of its gathered terms. */
function ofLaws(claims: readonly Claim[], model: NamedModel | undefined, term: Term | null): Mark | null {
  if (!model || !term) return null;
  const index = Number(term.ref.split('/').at(-1));
  const pieces = new Set(model.terms.flatMap((one) => (one.group === index ? [one.piece] : [])));
  const own = claims.filter((claim) => claim.audit === 'commute' && claim.subject === model.name);
  for (const claim of own) {
    const failing = tableOf(claim).find((row) => !row.holds && pieces.has(row.term));
    if (claim.grade === 'refuted' && failing)
      return { grade: 'refuted', words: `does not commute with ${failing.law}` };
  }
  // Of the other terms of a refuted claim no grade is given, so none is shown.
  const whole = own.every((claim) => claim.grade !== 'refuted');
  const grade = whole ? weakest(own.map((claim) => claim.grade)) : undefined;
  return grade ? { grade, words: `commutes with the laws: ${grade}` } : null;
}

/**
 * The mark of a pair: refuted if either term is refuted against a law; else the weakest grade claimed of the map that
 * leads from one to the other; for a term that stands alone, what is claimed of it and the laws. Null: nothing is claimed.
 */
export function markOf(
  claims: readonly Claim[],
  map: string | null,
  model: NamedModel,
  term: Term | null,
  other: NamedModel | undefined,
  image: Term | null,
): Mark | null {
  const laws = [ofLaws(claims, model, term), ofLaws(claims, other, image)].filter((mark) => mark !== null);
  const refuted = laws.find((mark) => mark.grade === 'refuted');
  if (refuted) return refuted;
  if (map !== null && term && image) {
    const grade = weakest(
      claims.filter((claim) => claim.audit === 'map' && claim.subject === map).map((claim) => claim.grade),
    );
    if (grade) return { grade, words: `the map ${map}: ${grade}` };
  }
  const grade = weakest(laws.map((mark) => mark.grade));
  return laws.find((mark) => mark.grade === grade) ?? null;
}

/** What is claimed of a map, or of a law: one mark for each grade, strongest last, with the statements in its words. */
export function marksOfName(claims: readonly Claim[], what: string, name: string): readonly Mark[] {
  const audit = what === 'map' ? 'map' : what === 'law' ? 'laws' : what === 'rule' ? 'count' : null;
  const own = claims.filter((claim) => claim.audit === audit && subjects(claim).includes(name));
  return order
    .map((grade) => ({ grade, of: own.filter((claim) => claim.grade === grade) }))
    .filter(({ of }) => of.length > 0)
    .map(({ grade, of }) => ({ grade, words: of.map((claim) => claim.statement).join(' ') }));
}

const subjects = (claim: Claim): readonly string[] => claim.subject.split(/[,\s]+/);
