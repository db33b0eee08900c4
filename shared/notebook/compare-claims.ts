import { canonical } from '../contracts/canonical.ts';
import type { Claim } from '../contracts/report.ts';
import type { ClaimDifference } from '../contracts/reviews.ts';
import { likeness } from './pieces.ts';

/** Figures that differ by no more than this, relative to their size, are the same: rounding differs between machines. */
const rounding = 1e-7;

const side = ({ line, statement, tex, grade, figures, cautions }: Claim): NonNullable<ClaimDifference['left']> => ({
  line,
  statement,
  tex,
  grade,
  figures,
  cautions,
});

/**
 * Claims that only one side makes, and those whose grade, figures or cautions differ. Which claim is which: the same audit of the
 * same subject at the same size, with the same statement where there is one, else the one that reads most alike.
 */
export function compareClaims(left: readonly Claim[], right: readonly Claim[]): ClaimDifference[] {
  const differences: ClaimDifference[] = [];
  const partner = matchClaims(left, right);
  const taken = new Set(partner.values());
  for (const claim of left) {
    if (!taken.has(claim)) {
      differences.push({ what: 'removed', audit: claim.audit, subject: claim.subject, left: side(claim), right: null });
    }
  }
  for (const claim of right) {
    const { audit, subject } = claim;
    const other = partner.get(claim);
    if (other === undefined) differences.push({ what: 'added', audit, subject, left: null, right: side(claim) });
    else if (other.grade !== claim.grade)
      differences.push({ what: 'grade', audit, subject, left: side(other), right: side(claim) });
    else if (!same(other.figures, claim.figures) || !sameSet(other.cautions, claim.cautions))
      differences.push({ what: 'figures', audit, subject, left: side(other), right: side(claim) });
  }
  return differences;
}

const keyOf = ({ audit, subject, figures }: Claim): string => `${audit} ${subject} ${canonical(figures.size ?? null)}`;

/** Claim on the right to claim on the left. */
function matchClaims(left: readonly Claim[], right: readonly Claim[]): Map<Claim, Claim> {
  const partner = new Map<Claim, Claim>();
  const free = new Map<string, Claim[]>();
  for (const claim of left) free.set(keyOf(claim), [...(free.get(keyOf(claim)) ?? []), claim]);
  const take = (claim: Claim, choose: (others: readonly Claim[]) => number): void => {
    const others = free.get(keyOf(claim)) ?? [];
    const at = partner.has(claim) ? -1 : choose(others);
    const [other] = at === -1 ? [] : others.splice(at, 1);
    if (other !== undefined) partner.set(claim, other);
  };
  for (const claim of right) take(claim, (others) => others.findIndex((other) => other.statement === claim.statement));
  for (const claim of right) {
    take(claim, (others) => {
      const like = others.map((other) => likeness(other.statement, claim.statement));
      return like.indexOf(Math.max(...like));
    });
  }
  return partner;
}

const sameSet = (a: readonly string[], b: readonly string[]): boolean =>
  a.length === b.length && [...a].sort().join('\n') === [...b].sort().join('\n');

function same(a: unknown, b: unknown): boolean {
  if (typeof a === 'number' && typeof b === 'number') {
    return a === b || Math.abs(a - b) <= rounding * Math.max(1, Math.abs(a), Math.abs(b));
  }
  if (typeof a !== 'object' || typeof b !== 'object' || a === null || b === null) return a === b;
  if (Array.isArray(a) !== Array.isArray(b)) return false;
  const mine = Object.entries(a) as [string, unknown][];
  const theirs = new Map(Object.entries(b) as [string, unknown][]);
  return (
    mine.length === theirs.size && mine.every(([name, value]) => theirs.has(name) && same(value, theirs.get(name)))
  );
}
