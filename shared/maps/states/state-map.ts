import { Coefficient } from '../../algebra/numbers/coefficient.ts';
import type { BlockTerm } from '../../algebra/pauli/block.ts';
import { phaseCoefficient } from '../../algebra/pauli/collect.ts';
import { canonicalExtended } from '../../algebra/pauli/extended.ts';
import { collect } from '../../algebra/pauli/family.ts';
import { classKey, multiplyStrings, newString, siteKey, translateString } from '../../algebra/pauli/string.ts';
import type {
  Extended,
  Factor,
  Family,
  LocalString,
  Operator,
  Pauli,
  ProductPart,
  Steps,
} from '../../algebra/pauli/types.ts';
import { shifted, type Cell, type Offset } from '../../lattice/cells.ts';
import { BudgetSpent, limits, type Budget } from '../../limits.ts';
import type { OperatorMap, Outcome, StateBlock } from '../../language/values.ts';
import type { Context } from '../context.ts';
import { extendedPhrase, stringPhrase } from '../phrases.ts';
import { allowed, MapRefused, refused } from '../refusals.ts';
import { contains, gcd, inSteps, lcm, minus, mod, refined, residues } from '../steps.ts';
import { adjointIsometry, blockImage, isometryOf, leaves, type Isometry, type StatesDeclaration } from './isometry.ts';

/** A translate of a block, and the letters that a string has on its source spins. */
interface Touched {
  readonly block: number;
  readonly by: Offset;
  readonly letters: string;
}

/** A term apart: blocks it touches, in order, and the spins that no block takes. */
interface Split {
  readonly touched: readonly Touched[];
  readonly rest: LocalString;
}

/** Most Pauli strings of one image. */
const mostTerms = 4_096;

/** Two translates of blocks that share a spin on a side. */
function overlapping(blocks: readonly StateBlock[], side: 'from' | 'to'): boolean {
  return blocks.some((a, i) =>
    blocks.slice(i).some((b, k) =>
      a[side].some((s, m) =>
        b[side].some((t, n) => {
          if (classKey(s) !== classKey(t) || (k === 0 && m === n)) return false;
          return inSteps(
            minus(s.cell.offset, t.cell.offset),
            a.steps.map((x, d) => gcd(x, b.steps[d] ?? 0)),
          );
        }),
      ),
    ),
  );
}

/** Stands where a string has no block; the sentence is a refusal's. */
const uncovered = (f: Factor, context: Context): string =>
  `no block of ${context.name} holds the spin ${stringPhrase({ phase: 0, factors: [f] }, context.family)}`;

/**
 * Every source spin of a string in its block. `at` reduces translations where the string stands for a product along the lattice.
 * Spins of other species are carried along; a spin of a source species outside all blocks is the error returned.
 */
function split(
  string: LocalString,
  declaration: StatesDeclaration,
  context: Context,
  at: (by: Offset) => Offset = (by) => by,
): Split | string {
  const found = new Map<string, { block: number; by: Offset; letters: string[] }>();
  const rest: Factor[] = [];
  for (const f of string.factors) {
    if (!declaration.from.includes(f.species)) {
      rest.push(f);
      continue;
    }
    let placed = false;
    for (const [block, b] of declaration.blocks.entries())
      for (const [k, s] of b.from.entries()) {
        if (placed || classKey(s) !== classKey(f)) continue;
        const by = minus(f.cell.offset, s.cell.offset);
        if (!inSteps(by, b.steps)) continue;
        const home = at(by);
        const key = `${String(block)}@${home.join(',')}`;
        const own = found.get(key) ?? { block, by: home, letters: b.from.map(() => 'I') };
        own.letters[k] = f.pauli.toUpperCase();
        found.set(key, own);
        placed = true;
      }
    if (!placed) return uncovered(f, context);
  }
  const touched = [...found.values()]
    .map((t): Touched => ({ ...t, letters: t.letters.join('') }))
    .sort((a, b) => a.block - b.block || compare(a.by, b.by));
  return { touched, rest: { phase: 0, factors: rest } };
}

const compare = (a: Offset, b: Offset): number => {
  const d = a.findIndex((c, k) => c !== b[k]);
  return d < 0 ? 0 : (a[d] ?? 0) - (b[d] ?? 0);
};

/** Letters on the target spins of a block's translate, as a string. */
function onTarget(letters: string, block: StateBlock, by: Offset): LocalString {
  return newString(
    block.to.flatMap((s, k): Factor[] => {
      const letter = letters[k] ?? 'I';
      return letter === 'I'
        ? []
        : [{ species: s.species, cell: shifted(s.cell, by), pauli: letter.toLowerCase() as Pauli }];
    }),
  );
}

/** A key for which blocks a term touches, up to a common translation. */
const patternKey = (s: Split, steps: Steps): string => {
  const base = s.touched[0]?.by ?? [];
  const pinned = steps.map((m, d) => (m === 0 ? String(base[d] ?? 0) : String(mod(base[d] ?? 0, m)))).join(',');
  return `${pinned}|${s.touched.map((t) => `${String(t.block)}@${minus(t.by, base).join(',')}`).join(' ')}|${stringPhraseKey(s.rest, base)}`;
};
const stringPhraseKey = (s: LocalString, base: Offset): string =>
  s.factors
    .map((f) => `${f.pauli}${siteKey({ ...f, cell: { ...f.cell, offset: minus(f.cell.offset, base) } })}`)
    .join(' ');

/**
 * The map that lines |bits> => image declare, block by block: O becomes V O V† with V the product of the blocks' isometries, exact and in
 * Pauli strings; untouched blocks are the identity on the image. States that are not listed are projected away; a term that joins an
 * allowed state to a forbidden one is named in the cautions, judged on the collected operator.
 */
export function stateMap(declaration: StatesDeclaration, context: Context): OperatorMap {
  return blockwise(declaration, isometryOf(declaration), context);
}

/**
 * What an operator of the target spins is on the image of a state map, told on its listed source states: O becomes V† O V. The image has
 * the same levels under O as the listed states have under V† O V, since V joins them one to one; source states that are not listed stay forbidden.
 */
export function pulledBack(declaration: StatesDeclaration, context: Context): OperatorMap {
  const swapped: StatesDeclaration = {
    ...declaration,
    from: declaration.to,
    to: declaration.from,
    blocks: declaration.blocks.map((b) => ({ ...b, from: b.to, to: b.from })),
  };
  return blockwise(swapped, adjointIsometry(isometryOf(declaration)), context);
}

/** O ↦ W O W† for a product W of block matrices. */
function blockwise(declaration: StatesDeclaration, iso: Isometry, context: Context): OperatorMap {
  const { blocks, from, to } = declaration;
  const { open } = context;
  for (const side of ['from', 'to'] as const)
    if (overlapping(blocks, side))
      throw new MapRefused(`blocks of ${context.name} overlap on the ${side === 'from' ? 'source' : 'target'} side`);
  const images = new Map<string, readonly BlockTerm[]>();
  const imageOf = (letters: string): readonly BlockTerm[] => {
    const known = images.get(letters) ?? blockImage([{ letters, coefficient: Coefficient.one }], iso);
    images.set(letters, known);
    return known;
  };
  const periods = blocks.map((b) => b.steps);

  /** Pieces of a family on the blocks' common period, each apart. */
  const pieces = (f: Family): { piece: Family; apart: Split }[] | string => {
    const steps = refined(f.steps, periods);
    const out: { piece: Family; apart: Split }[] = [];
    for (const by of residues(f.steps, steps)) {
      const string = translateString(f.string, by);
      const apart = split(string, declaration, context);
      if (typeof apart === 'string') return apart;
      const still = apart.touched.some((t) => !contains(blocks[t.block]?.steps ?? [], steps));
      if (still) return `${context.name} has blocks that stand still; a term of every cell has no image under them`;
      out.push({ piece: { ...f, string, steps, needs: f.needs.map((c) => shifted(c, by)) }, apart });
    }
    return out;
  };

  const familyImage = (f: Family, budget: Budget): Outcome<Family[]> => {
    if (f.string.factors.length === 0) return allowed([f]);
    const wrong = f.string.factors.find((x) => to.includes(x.species) && !from.includes(x.species));
    if (wrong)
      return refused(
        `${context.name} takes ${from.join(', ')}; this term already holds ${wrong.species}, a species it maps to`,
        f.string,
      );
    const all = pieces(f);
    if (typeof all === 'string') return refused(all, f.string);
    const out: Family[] = [];
    for (const { piece, apart } of all) {
      let terms: { coefficient: Coefficient; string: LocalString }[] = [
        { coefficient: piece.coefficient.mul(phaseCoefficient(piece.string.phase)), string: apart.rest },
      ];
      for (const t of apart.touched) {
        const block = blocks[t.block];
        if (!block) continue;
        const image = imageOf(t.letters);
        budget.spend(terms.length * image.length + 1);
        if (terms.length * image.length > mostTerms)
          throw new BudgetSpent(`Pauli strings in the image of one term (${String(mostTerms)})`);
        terms = terms.flatMap((left) =>
          image.map((right) => ({
            coefficient: left.coefficient.mul(right.coefficient),
            string: multiplyStrings(left.string, onTarget(right.letters, block, t.by)),
          })),
        );
      }
      const needs: Cell[] = open
        ? [...piece.needs, ...piece.string.factors.filter((x) => !x.optional).map((x) => x.cell)]
        : [];
      out.push(...terms.map(({ coefficient, string }): Family => ({ coefficient, string, steps: piece.steps, needs })));
    }
    if (out.length > limits.families)
      throw new BudgetSpent(`Pauli families in one operator (${String(limits.families)})`);
    return allowed(out);
  };

  const imageExtended = (extended: Extended, budget: Budget): Outcome<Extended> => {
    const whole = canonicalExtended(extended, { open: false, budget });
    const image: ProductPart[] = whole.parts.filter((p) => p.string.factors.length === 0);
    for (const group of alike(
      whole.parts.filter((p) => p.string.factors.length > 0),
      periods,
    )) {
      const { string, steps } = group;
      const home = (by: Offset) => by.map((c, d) => ((steps[d] ?? 0) > 0 ? mod(c, steps[d] ?? 1) : c));
      const apart = split(string, declaration, context, home);
      if (typeof apart === 'string') return refused(apart, extended);
      let product = apart.rest;
      for (const t of apart.touched) {
        const [only, ...more] = imageOf(t.letters);
        const block = blocks[t.block];
        const sign = only?.coefficient.isOne() ? 0 : only?.coefficient.neg().isOne() ? 2 : undefined;
        if (!only || !block || more.length > 0 || sign === undefined)
          return refused(
            `the image of ${extendedPhrase(whole, context.family)} is no product of Pauli matrices: on one block it is a sum of strings`,
            extended,
          );
        product = multiplyStrings(
          { ...product, phase: ((product.phase + sign) & 3) as LocalString['phase'] },
          onTarget(only.letters, block, t.by),
        );
      }
      image.push({ string: product, steps, needs: [] });
    }
    return allowed(canonicalExtended({ phase: whole.phase, parts: image }, { open, budget }));
  };

  const leaking = (operator: Operator): string[] => {
    const groups = new Map<string, { terms: { letters: string[]; coefficient: Coefficient }[]; first: LocalString }>();
    for (const f of collect([operator], { open: false }).families) {
      const all = f.string.factors.length === 0 ? [] : pieces(f);
      if (typeof all === 'string') continue;
      for (const { piece, apart } of all) {
        const key = `${piece.steps.join(',')}|${patternKey(apart, piece.steps)}`;
        const group = groups.get(key) ?? { terms: [], first: piece.string };
        group.terms.push({
          letters: apart.touched.map((t) => t.letters),
          coefficient: piece.coefficient.mul(phaseCoefficient(piece.string.phase)),
        });
        groups.set(key, group);
      }
    }
    return [...groups.values()].flatMap(({ terms, first }) => {
      const way = leaves(terms, iso);
      return way
        ? [
            `terms like ${stringPhrase({ phase: 0, factors: first.factors }, context.family)} leave the allowed states (|${way.from}> to |${way.to}>); that part is projected away`,
          ]
        : [];
    });
  };

  return {
    kind: 'states',
    from,
    to,
    image(operator, budget) {
      const out: Operator[] = [];
      for (const f of operator.families) {
        const image = familyImage(f, budget);
        if (!image.ok) return image;
        out.push({ families: image.value, extended: [] });
      }
      for (const t of operator.extended) {
        const image = imageExtended(t.extended, budget);
        if (!image.ok) return image;
        out.push({ families: [], extended: [{ coefficient: t.coefficient, extended: image.value }] });
      }
      return allowed(collect(out, { open, budget }));
    },
    imageExtended,
    laws: new Map(),
    cautions: (operator) => leaking(operator),
  };
}

/** Parts along the same directions as one string on their common period, which is that of the blocks too. */
function alike(parts: readonly ProductPart[], periods: readonly Steps[]): { string: LocalString; steps: Steps }[] {
  const groups = new Map<string, ProductPart[]>();
  for (const p of parts) {
    const key = p.steps.map((m) => (m === 0 ? '.' : '*')).join('');
    groups.set(key, [...(groups.get(key) ?? []), p]);
  }
  return [...groups.values()].map((own) => {
    const common = own.reduce<number[]>(
      (all, p) => all.map((m, d) => lcm(m, p.steps[d] ?? 0)),
      [...(own[0]?.steps ?? [])],
    );
    const steps = refined(common, periods);
    const string = own.reduce<LocalString>(
      (all, p) =>
        residues(p.steps, steps).reduce((product, r) => multiplyStrings(product, translateString(p.string, r)), all),
      { phase: 0, factors: [] },
    );
    return { string, steps };
  });
}
