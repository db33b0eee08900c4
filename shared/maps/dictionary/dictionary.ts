import { canonicalExtended } from '../../algebra/pauli/extended.ts';
import { collect, refineFamily } from '../../algebra/pauli/family.ts';
import { multiplyStrings, stringKey, toPhase, translateString } from '../../algebra/pauli/string.ts';
import type { Extended, Family, LocalString, Operator, Steps } from '../../algebra/pauli/types.ts';
import { shifted, type Cell } from '../../lattice/cells.ts';
import type { Budget } from '../../limits.ts';
import type { OperatorMap, Outcome } from '../../language/values.ts';
import type { Context } from '../context.ts';
import { extendedPhrase, stringPhrase } from '../phrases.ts';
import { allowed, refused } from '../refusals.ts';
import { refined } from '../steps.ts';
import { chargedUnder } from './charged.ts';
import { decompose, exactUse, extendedImage, isExtended, translateExtended } from './decompose.ts';
import type { DictionaryDeclaration } from './declaration.ts';
import { sectorWords } from './relations.ts';

/** Image of a local string: a string of either kind, and the cells that its rules name. */
interface Image {
  readonly side: LocalString | Extended;
  readonly needs: readonly Cell[];
}

const isWhole = (steps: Steps): boolean => steps.every((m) => m === 0);

/**
 * The map that a dictionary declares: terms are written as products of left sides and sent to the same products of right sides, which
 * is the bond-algebra homomorphism where the audit of the map holds. Spins of other species are carried along.
 */
export function dictionaryMap(declaration: DictionaryDeclaration, context: Context): OperatorMap {
  const { rules, from, to } = declaration;
  const known = new Map<string, Outcome<Image>>();

  const outside = (string: LocalString): string | undefined =>
    string.factors.find((f) => to.includes(f.species) && !from.includes(f.species))?.species;

  /** Own factors and those of species that the map leaves alone; they commute, being on different spins. */
  const parted = (string: LocalString): { own: LocalString; rest: LocalString } => ({
    own: { phase: string.phase, factors: string.factors.filter((f) => from.includes(f.species)) },
    rest: { phase: 0, factors: string.factors.filter((f) => !from.includes(f.species)) },
  });

  const find = (own: LocalString, shift: Steps, budget: Budget): Outcome<Image> => {
    const single = exactUse(own, shift, rules);
    // most charged terms are found by a look at the familiar symmetries, before any search
    const quick = single ? undefined : chargedUnder(own, rules, from, context, 'familiar', budget);
    const found = quick ? undefined : decompose(own, shift, rules, budget);
    if (!found || found === 'outside') {
      const symmetry = quick ?? chargedUnder(own, rules, from, context, 'all', budget);
      const phrase = stringPhrase({ phase: 0, factors: own.factors }, context.family);
      if (symmetry)
        return refused(
          `${phrase} is no product of left sides of ${context.name}: it anticommutes with ${symmetry.text}, which commutes with all of them`,
          own,
          symmetry,
        );
      return refused(
        `${phrase} ${found === 'outside' ? 'is no' : 'was not found as a'} product of left sides of ${context.name}`,
        own,
      );
    }
    let side: LocalString | Extended = { phase: found.phase, factors: [] };
    const needs: Cell[] = [];
    for (const use of found.uses) {
      const rule = rules[use.generator];
      if (!rule) continue;
      side = times(
        side,
        isExtended(rule.right) ? translateExtended(rule.right, use.by) : translateString(rule.right, use.by),
      );
      needs.push(...rule.needs.map((c) => shifted(c, use.by)));
    }
    if (isExtended(side)) side = localIfPossible(canonicalExtended(side, { open: false, budget }));
    return allowed({ side, needs });
  };

  const localImage = (own: LocalString, shift: Steps, budget: Budget): Outcome<Image> => {
    const key = `${shift.join(',')}|${stringKey(own)}`;
    const before = known.get(key);
    if (before) return before;
    const image = find(own, shift, budget);
    known.set(key, image);
    return image;
  };

  const familyImage = (family: Family, budget: Budget): Outcome<Operator> => {
    if (family.string.factors.length === 0) return allowed({ families: [family], extended: [] });
    const wrong = outside(family.string);
    if (wrong !== undefined)
      return refused(
        `${context.name} takes ${from.join(', ')}; this term already holds ${wrong}, a species it maps to`,
        family.string,
      );
    const steps = refined(
      family.steps,
      rules.map((r) => r.steps),
    );
    const out: Operator[] = [];
    for (const piece of refineFamily(family, steps)) {
      const { own, rest } = parted(piece.string);
      const image =
        own.factors.length === 0 ? allowed<Image>({ side: own, needs: [] }) : localImage(own, steps, budget);
      if (!image.ok) return image;
      const side = times(image.value.side, rest);
      const needs = context.open ? [...piece.needs, ...image.value.needs] : [];
      if (!isExtended(side)) out.push({ families: [{ ...piece, string: side, needs }], extended: [] });
      else if (isWhole(steps))
        out.push({ families: [], extended: [{ coefficient: piece.coefficient, extended: side }] });
      else
        return refused(
          `the image of ${stringPhrase(own, context.family)} is a string of unbounded support for each cell, and a sum over cells holds local terms only; take the image of the operator at one cell instead, as in operator O = ${context.name}(…)`,
          own,
        );
    }
    return allowed({ families: out.flatMap((o) => o.families), extended: out.flatMap((o) => o.extended) });
  };

  const imageExtended = (extended: Extended, budget: Budget): Outcome<Extended> => {
    const parts = canonicalExtended(extended, { open: false, budget });
    const own = parts.parts.filter((p) => p.string.factors.every((f) => from.includes(f.species)));
    const rest = parts.parts.filter((p) => !own.includes(p));
    if (rest.some((p) => outside(p.string) !== undefined || p.string.factors.some((f) => from.includes(f.species))))
      return refused(`${context.name} takes ${from.join(', ')}; this product holds other spins between them`, extended);
    const image = extendedImage({ phase: parts.phase, parts: own }, rules, context.open, budget);
    if (!image)
      return refused(
        `${extendedPhrase(parts, context.family)} was not found as a product of left sides of ${context.name}`,
        extended,
      );
    return allowed(
      rest.length === 0
        ? image
        : canonicalExtended({ phase: image.phase, parts: [...image.parts, ...rest] }, { open: context.open, budget }),
    );
  };

  return {
    kind: 'dictionary',
    from,
    to,
    image(operator, budget) {
      const out: Operator[] = [];
      for (const family of operator.families) {
        const image = familyImage(family, budget);
        if (!image.ok) return image;
        out.push(image.value);
      }
      for (const term of operator.extended) {
        const image = imageExtended(term.extended, budget);
        if (!image.ok) return image;
        out.push({ families: [], extended: [{ coefficient: term.coefficient, extended: image.value }] });
      }
      return allowed(collect(out, { open: context.open, budget }));
    },
    imageExtended,
    laws: new Map(),
    cautions: (_, budget) => sectorWords(declaration, context, budget),
  };
}

/**
 * Terms that an open edge cuts and that are no left side of their own: their image is the bulk's, cut at the edge in its turn, which need not
 * be the image of what the edge leaves of them. In words, one for each.
 */
export function cutTerms({ rules, from }: DictionaryDeclaration, operator: Operator, context: Context): string[] {
  if (!context.open) return [];
  return operator.families.flatMap((family) => {
    const own: LocalString = { phase: 0, factors: family.string.factors.filter((f) => from.includes(f.species)) };
    const whole = refined(
      family.steps,
      rules.map((rule) => rule.steps),
    );
    return own.factors.some((f) => f.optional) && !exactUse(own, whole, rules)
      ? [
          `${stringPhrase(own, context.family)} is cut where it stands at an open edge; its image there is that of the whole term, cut likewise`,
        ]
      : [];
  });
}

function times(a: LocalString | Extended, b: LocalString | Extended): LocalString | Extended {
  if (!isExtended(a) && !isExtended(b)) return multiplyStrings(a, b);
  const wide = (s: LocalString | Extended): Extended =>
    isExtended(s)
      ? s
      : s.factors.length === 0
        ? { phase: s.phase, parts: [] }
        : { phase: 0, parts: [{ string: s, steps: s.factors[0]?.cell.offset.map(() => 0) ?? [], needs: [] }] };
  const [p, q] = [wide(a), wide(b)];
  return { phase: toPhase(p.phase + q.phase), parts: [...p.parts, ...q.parts] };
}

/** An extended string all of whose parts are pinned is a local one. */
function localIfPossible(e: Extended): LocalString | Extended {
  return e.parts.every((p) => isWhole(p.steps))
    ? e.parts.reduce<LocalString>((all, p) => multiplyStrings(all, p.string), { phase: e.phase, factors: [] })
    : e;
}
