import { canonical } from '../contracts/canonical.ts';
import type { EntryKind } from '../contracts/notebooks.ts';
import type { Report, ReportDeclaration, ReportModel, ReportTerm } from '../contracts/report.ts';
import type {
  DeclarationDifference,
  EntryDifference,
  ModelDifference,
  PhysicsDifference,
  TermDifference,
} from '../contracts/reviews.ts';
import { likeness, piecesOf } from './pieces.ts';
import { compareClaims } from './compare-claims.ts';

/** An entry to be compared; the same id on both sides is the same entry, whatever it reads. */
export interface ComparedEntry {
  readonly id: string | null;
  readonly kind: EntryKind;
  readonly text: string;
}

/** Below this two texts are not one entry that was changed, but two. */
const akin = 0.35;
/** Past this many pairs, entries without an id are matched in order only. */
const mostPairs = 40_000;

/**
 * Entries that were added, removed or changed, in the right side's order, what was removed at the place where it stood.
 * Where an entry stands is no difference.
 */
export function compareEntries(left: readonly ComparedEntry[], right: readonly ComparedEntry[]): EntryDifference[] {
  const partner = matchEntries(left, right);
  const differences: (EntryDifference & { readonly place: number })[] = [];
  const taken = new Set(partner.values());
  right.forEach((entry, at) => {
    const mine = partner.get(at);
    const other = mine === undefined ? undefined : left[mine];
    if (other !== undefined && other.kind === entry.kind && other.text === entry.text) return;
    differences.push({
      what: other === undefined ? 'added' : 'changed',
      kind: entry.kind,
      left: mine === undefined ? null : mine + 1,
      right: at + 1,
      pieces: other === undefined ? piecesOf('', entry.text) : piecesOf(other.text, entry.text),
      place: at,
    });
  });
  const seen = new Map([...partner].map(([r, l]) => [l, r]));
  let place = -0.5;
  left.forEach((entry, at) => {
    const there = seen.get(at);
    if (there !== undefined) place = there + 0.5;
    if (taken.has(at)) return;
    differences.push({
      what: 'removed',
      kind: entry.kind,
      left: at + 1,
      right: null,
      pieces: piecesOf(entry.text, ''),
      place,
    });
  });
  return differences.sort((a, b) => a.place - b.place).map(({ place: _place, ...difference }) => difference);
}

/** Which entry on the left is which on the right: number on the right to number on the left. */
function matchEntries(left: readonly ComparedEntry[], right: readonly ComparedEntry[]): Map<number, number> {
  const partner = new Map<number, number>();
  const free = new Set(left.keys());
  const match = (r: number, l: number): void => {
    partner.set(r, l);
    free.delete(l);
  };
  const matchBy = (key: (entry: ComparedEntry) => string | null): void => {
    const waiting = new Map<string, number[]>();
    for (const l of free) {
      const name = left[l] && key(left[l]);
      if (name !== null && name !== undefined) waiting.set(name, [...(waiting.get(name) ?? []), l]);
    }
    right.forEach((entry, r) => {
      const name = key(entry);
      const l = partner.has(r) || name === null ? undefined : waiting.get(name)?.shift();
      if (l !== undefined) match(r, l);
    });
  };
  matchBy((entry) => entry.id);
  matchBy((entry) => `${entry.kind} ${entry.text}`);
  const open = right.flatMap((entry, r) => (partner.has(r) ? [] : [[r, entry] as const]));
  if (open.length * free.size > mostPairs) {
    const rest = [...free];
    open.forEach(([r, entry], at) => {
      const l = rest[at];
      if (l !== undefined && left[l]?.kind === entry.kind) match(r, l);
    });
    return partner;
  }
  const pairs = open.flatMap(([r, entry]) =>
    [...free].flatMap((l) => {
      const other = left[l];
      const like = other?.kind === entry.kind ? likeness(other.text, entry.text) : 0;
      return like >= akin ? [{ r, l, like }] : [];
    }),
  );
  for (const { r, l } of pairs.sort((a, b) => b.like - a.like || a.r - b.r || a.l - b.l)) {
    if (!partner.has(r) && free.has(l)) match(r, l);
  }
  return partner;
}

/**
 * What differs between two reports as physics. A model is its terms: each a translation orbit of Pauli strings with an exact
 * coefficient, so neither the order of terms nor the way they were written counts.
 */
export function compareReports(left: Report, right: Report): PhysicsDifference {
  return {
    models: compareModels(left.models, right.models),
    declarations: compareDeclarations(left.declarations, right.declarations),
    claims: compareClaims(left.claims, right.claims),
  };
}

type Models = Report['models'];

function compareModels(left: Models, right: Models): ModelDifference[] {
  const differences: ModelDifference[] = [];
  const gone = Object.keys(left).filter((name) => right[name] === undefined);
  const come = new Set(Object.keys(right).filter((name) => left[name] === undefined));
  for (const name of gone) {
    const mine = left[name];
    const other = mine && [...come].find((candidate) => right[candidate] && sameModel(mine, right[candidate]));
    if (other === undefined) {
      differences.push({ left: name, right: null, terms: compareTerms(mine?.terms ?? [], []), constant: null });
    } else {
      come.delete(other);
      differences.push({ left: name, right: other, terms: [], constant: null });
    }
  }
  for (const [name, model] of Object.entries(right)) {
    const other = left[name];
    if (come.has(name))
      differences.push({ left: null, right: name, terms: compareTerms([], model.terms), constant: null });
    if (other === undefined) continue;
    const terms = compareTerms(other.terms, model.terms);
    const constant = other.constant === model.constant ? null : { left: other.constant, right: model.constant };
    if (terms.length > 0 || constant !== null) differences.push({ left: name, right: name, terms, constant });
  }
  return differences;
}

const sameModel = (a: ReportModel, b: ReportModel): boolean =>
  a.constant === b.constant && compareTerms(a.terms, b.terms).length === 0;

type Term = Pick<ReportTerm, 'coefficient' | 'tex' | 'spoken' | 'orbit' | 'steps'>;
type Factor = ReportTerm['orbit'][number];

/** A term's string as one text: the same for every translate that belongs to the same orbit, and for every order of its factors. */
export function orbitKey({ orbit, steps }: Pick<Term, 'orbit' | 'steps'>): string {
  const shift = steps.map((step, d) => {
    if (step === 0) return 0;
    const least = Math.min(...orbit.map((factor) => factor.offset[d] ?? 0));
    return Math.floor(least / step) * step;
  });
  const factors = orbit.map(({ species, cell, offset, pauli }) => {
    const moved = offset.map((entry, d) => String(entry - (shift[d] ?? 0)));
    return `${species}^${pauli}[${cell} ${moved.join(',')}]`;
  });
  return `${steps.join(',')}: ${factors.sort().join(' ')}`;
}

/** The text of the negative of a coefficient, in the canonical form that the report writes. */
export function negative(text: string): string {
  const first = text.startsWith('(') ? closing(text) : -1;
  if (first !== -1 && text[first + 1] === '/') return `(${negative(text.slice(1, first))})${text.slice(first + 1)}`;
  let depth = 0;
  let flipped = text.startsWith('-') ? '' : '-';
  for (let at = text.startsWith('-') ? 1 : 0; at < text.length; at += 1) {
    const character = text[at] ?? '';
    if (character === '(') depth += 1;
    if (character === ')') depth -= 1;
    const sign = depth === 0 ? text.slice(at, at + 3) : '';
    if (sign === ' + ' || sign === ' - ') {
      flipped += sign === ' + ' ? ' - ' : ' + ';
      at += 2;
    } else flipped += character;
  }
  return text === '0' ? text : flipped;
}

function closing(text: string): number {
  let depth = 0;
  for (let at = 0; at < text.length; at += 1) {
    if (text[at] === '(') depth += 1;
    if (text[at] === ')') depth -= 1;
    if (depth === 0) return at;
  }
  return -1;
}

const side = ({ coefficient, tex, spoken, orbit }: Term): NonNullable<TermDifference['left']> => ({
  coefficient,
  tex,
  spoken,
  orbit,
});

function compareTerms(left: readonly Term[], right: readonly Term[]): TermDifference[] {
  const differences: TermDifference[] = [];
  const waiting = new Map<string, Term[]>();
  for (const term of left) waiting.set(orbitKey(term), [...(waiting.get(orbitKey(term)) ?? []), term]);
  const come: Term[] = [];
  for (const term of right) {
    const others = waiting.get(orbitKey(term)) ?? [];
    const at = Math.max(
      0,
      others.findIndex((other) => other.coefficient === term.coefficient),
    );
    const [other] = others.splice(at, 1);
    if (other === undefined) come.push(term);
    else if (other.coefficient !== term.coefficient) {
      const what = negative(other.coefficient) === term.coefficient ? 'sign' : 'coefficient';
      differences.push({ what, left: side(other), right: side(term) });
    }
  }
  const gone = [...waiting.values()].flat();
  const moved = pairMoved(gone, come);
  for (const [term, other] of moved) differences.push({ what: 'support', left: side(term), right: side(other) });
  const paired = new Set(moved.flat());
  for (const term of gone) if (!paired.has(term)) differences.push({ what: 'removed', left: side(term), right: null });
  for (const term of come) if (!paired.has(term)) differences.push({ what: 'added', left: null, right: side(term) });
  return differences;
}

/** Terms with one coefficient, up to its sign, on the same kinds of spins: one that was moved or got other letters. Nearest first. */
function pairMoved(gone: readonly Term[], come: readonly Term[]): [Term, Term][] {
  const pairs = gone.flatMap((a) =>
    come.flatMap((b) => {
      const like = nearness(a, b);
      return like > 0 ? [{ a, b, like }] : [];
    }),
  );
  const taken = new Set<Term>();
  return pairs
    .sort((p, q) => q.like - p.like)
    .flatMap(({ a, b }) => {
      if (taken.has(a) || taken.has(b)) return [];
      taken.add(a).add(b);
      return [[a, b] as [Term, Term]];
    });
}

function nearness(a: Term, b: Term): number {
  const same = a.coefficient === b.coefficient;
  if (!same && negative(a.coefficient) !== b.coefficient) return 0;
  const species = (term: Term): string => [...new Set(term.orbit.map((factor) => factor.species))].sort().join(' ');
  if (species(a) !== species(b)) return 0;
  const overlap = (name: (factor: Factor) => string): number => {
    const mine = a.orbit.map(name);
    const shared = b.orbit.map(name).filter((one) => {
      const at = mine.indexOf(one);
      if (at !== -1) mine.splice(at, 1);
      return at !== -1;
    });
    return (2 * shared.length) / (a.orbit.length + b.orbit.length);
  };
  const where = overlap(({ cell, offset }) => `${cell} ${offset.join(',')}`);
  const letters = overlap(({ cell, pauli }) => `${cell} ${pauli}`);
  const like = where + letters + (same ? 0.5 : 0);
  return where + letters >= 0.5 ? like : 0;
}

function compareDeclarations(
  left: readonly ReportDeclaration[],
  right: readonly ReportDeclaration[],
): DeclarationDifference[] {
  const named = (all: readonly ReportDeclaration[]): Map<string, ReportDeclaration> =>
    new Map(all.map((one) => [one.what === 'lattice' ? 'lattice' : `${one.what} ${one.name}`, one]));
  const mine = named(left);
  const theirs = named(right);
  const differences: DeclarationDifference[] = [];
  for (const [key, one] of mine) {
    const other = theirs.get(key);
    if (other !== undefined && sameDeclaration(one, other)) continue;
    differences.push({
      what: other === undefined ? 'removed' : 'changed',
      kind: one.what,
      name: other?.name ?? one.name,
      left: texOf(one),
      right: other === undefined ? null : texOf(other),
    });
  }
  for (const [key, one] of theirs) {
    if (mine.has(key)) continue;
    differences.push({ what: 'added', kind: one.what, name: one.name, left: null, right: texOf(one) });
  }
  return differences;
}

const texOf = ({ tex, rules }: ReportDeclaration): string =>
  rules === undefined || rules.length === 0
    ? tex
    : rules.map(({ left, right }) => `${left} \\mapsto ${right}`).join(';\\ ');

const sameDeclaration = (a: ReportDeclaration, b: ReportDeclaration): boolean =>
  // Rules of a map are a set: their order is no difference.
  a.rules !== undefined && b.rules !== undefined
    ? rulesKey(a.rules) === rulesKey(b.rules)
    : a.tex === b.tex && supportsKey(a) === supportsKey(b);

const rulesKey = (rules: NonNullable<ReportDeclaration['rules']>): string =>
  rules
    .map(({ left, right, leftOrbit, rightOrbit }) => canonical([left, right, leftOrbit, rightOrbit]))
    .sort()
    .join('\n');

const supportsKey = ({ supports }: ReportDeclaration): string => supports.map(orbitKey).sort().join('\n');
