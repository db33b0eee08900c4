import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { commuteWithExtended } from '../algebra/pauli/commutation.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import { collect } from '../algebra/pauli/family.ts';
import { oddShifts } from '../algebra/pauli/overlaps.ts';
import { classKey, multiplyStrings, toPhase, translateString } from '../algebra/pauli/string.ts';
import type { Extended, Factor, Family, LocalString, Operator, Pauli, ProductPart } from '../algebra/pauli/types.ts';
import { shifted } from '../lattice/cells.ts';
import type { LawFamily, MapDeclaration, OperatorMap, Outcome } from '../language/values.ts';
import type { Context } from './context.ts';
import { stringPhrase } from './phrases.ts';
import { allowed, MapRefused, refused } from './refusals.ts';
import { inSteps, minus, refined, residues } from './steps.ts';

export type SolvingDeclaration = Extract<MapDeclaration, { kind: 'solve' }>;

/** A law at its place, with the spin that it removes. */
export interface Solved {
  readonly law: LawFamily;
  readonly own: Factor;
}

/** The Pauli matrix that is set to 1 where the law holds `p`: it anticommutes with p, and is Z where that is possible. */
export const fixedPauli = (p: Pauli): Pauli => (p === 'z' ? 'x' : 'z');

/** Each family of the law with its own spin; refused unless laws and spins go one to one and the laws commute with one another. */
export function ownSpins({ law, species }: SolvingDeclaration): Solved[] {
  const solved = law.families.map((f): Solved => {
    const held = f.string.factors.filter((x) => x.species === species.name);
    const [own] = held;
    if (!own || held.length !== 1)
      throw new MapRefused(
        `${law.name} holds ${held.length === 0 ? 'no' : String(held.length)} spin${held.length === 1 ? '' : 's'} of ${species.name} at each cell; to solve it, it must hold its own copy: exactly one`,
      );
    return { law: f, own };
  });
  for (const [i, a] of solved.entries())
    for (const b of solved.slice(i + 1))
      if (classKey(a.own) === classKey(b.own)) {
        const steps = a.law.steps.map((m, d) => gcd(m, b.law.steps[d] ?? 0));
        if (inSteps(minus(a.own.cell.offset, b.own.cell.offset), steps))
          throw new MapRefused(
            `two cells of ${law.name} hold the same spin of ${species.name}; to solve it, each must hold its own copy`,
          );
      }
  for (const [i, a] of law.families.entries())
    for (const b of law.families.slice(i)) {
      const steps = a.steps.map((m, d) => gcd(m, b.steps[d] ?? 0));
      if (oddShifts(a.string, b.string).some((by) => inSteps(by, steps)))
        throw new MapRefused(`${law.name} does not commute with itself, so it cannot hold everywhere`);
    }
  return solved;
}

const gcd = (a: number, b: number): number => (b === 0 ? Math.abs(a) : gcd(b, a % b));

/**
 * Unitary gauge (E. Fradkin, S. Shenker, Phys. Rev. D 19, 3682 (1979)): a law that holds one spin of the species at each cell is used up to
 * remove it. Where a term holds the law's own Pauli matrix of a spin, the term is multiplied by the law (which is ±1 in the sector); what is left on the spin, the matrix
 * that anticommutes with it, is set to 1. On operators that commute with the law this keeps all products, so spectra agree.
 */
export function solvingMap(declaration: SolvingDeclaration, context: Context): OperatorMap {
  const { law, species } = declaration;
  const solved = ownSpins(declaration);
  const { family, open, values } = context;

  const removed = (string: LocalString): Outcome<LocalString> => {
    for (const { law: f } of solved) {
      const shift = oddShifts(string, f.string).find((by) => inSteps(by, f.steps));
      if (shift) {
        const at = translateString(f.string, shift);
        return refused(
          `${stringPhrase(string, family)} does not commute with ${law.name} = ${stringPhrase(at, family)}, so it leaves the sector that is solved`,
          string,
          {
            text: law.name,
            extended: { phase: 0, parts: [{ string: at, steps: shift.map(() => 0), needs: [] }] },
          },
        );
      }
    }
    let out = string;
    for (const f of string.factors) {
      if (f.species !== species.name) continue;
      const own = solved.find(
        (s) => classKey(s.own) === classKey(f) && inSteps(minus(f.cell.offset, s.own.cell.offset), s.law.steps),
      );
      if (!own)
        return refused(
          `no cell of ${law.name} holds the spin ${stringPhrase({ phase: 0, factors: [f] }, family)}, so it cannot be removed`,
          string,
        );
      if (f.pauli === fixedPauli(own.own.pauli)) continue;
      // T = T·G·value in the sector
      const at = translateString(own.law.string, minus(f.cell.offset, own.own.cell.offset));
      out = multiplyStrings(out, { ...at, phase: toPhase(at.phase + (law.value === 1 ? 0 : 2)) });
    }
    return allowed({ phase: out.phase, factors: out.factors.filter((f) => f.species !== species.name) });
  };

  const periods = solved.map((s) => s.law.steps);
  const familyImage = (f: Family): Outcome<Family[]> => {
    if (f.string.factors.length === 0) return allowed([f]);
    const steps = refined(f.steps, periods);
    const out: Family[] = [];
    const still =
      f.string.factors.some((x) => x.species === species.name) &&
      periods.some((p) => steps.some((m, d) => m > 0 && p[d] === 0));
    if (still)
      return refused(
        `${law.name} stands still where ${stringPhrase(f.string, family)} is a term of every cell; it removes the spin of only some of them`,
        f.string,
      );
    for (const by of residues(f.steps, steps)) {
      const image = removed(translateString(f.string, by));
      if (!image.ok) return image;
      const lost = open
        ? f.string.factors.filter((x) => x.species === species.name && !x.optional).map((x) => shifted(x.cell, by))
        : [];
      out.push({ ...f, string: image.value, steps, needs: [...f.needs.map((c) => shifted(c, by)), ...lost] });
    }
    return allowed(out);
  };

  const imageExtended: OperatorMap['imageExtended'] = (extended, budget) => {
    const whole = canonicalExtended(extended, { open: false, budget });
    const parts: ProductPart[] = [];
    for (const p of whole.parts) {
      const image = familyImage({ coefficient: Coefficient.one, ...p });
      if (!image.ok) {
        const joint = jointImage(whole, declaration, solved);
        return joint
          ? allowed(canonicalExtended(joint, { open, budget }))
          : refused(
              `this product was not brought to the gauge: ${image.refusal.reason}`,
              extended,
              image.refusal.symmetry,
            );
      }
      parts.push(...image.value.map(({ string, steps, needs }) => ({ string, steps, needs })));
    }
    return allowed(canonicalExtended({ phase: whole.phase, parts }, { open, budget }));
  };

  const others = [...values.all.values()].flatMap((v) =>
    v.what === 'spins' && v.name !== species.name ? [v.name] : [],
  );
  const inLaw = [...new Set(law.families.flatMap((f) => f.string.factors.map((x) => x.species)))].filter(
    (n) => n !== species.name,
  );
  return {
    kind: 'solve',
    from: [species.name, ...inLaw],
    to: inLaw.length > 0 ? inLaw : others,
    image(operator, budget) {
      const out: Operator[] = [];
      for (const f of operator.families) {
        const image = familyImage(f);
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
    cautions: () => [
      `${law.name} is used up: the image stands for the sector ${law.name} = ${law.value === 1 ? '+1' : '-1'}, in the gauge where the other matrix of ${species.name} is 1`,
    ],
  };
}

/**
 * A product whose parts break the law one by one but keep it together (a string of matter with its field): each spin of the species is
 * turned by the law as for terms, for each translate.
 */
function jointImage(
  extended: Extended,
  { law, species }: SolvingDeclaration,
  solved: readonly Solved[],
): Extended | undefined {
  const parts: ProductPart[] = [];
  for (const p of extended.parts) {
    const [f] = p.string.factors;
    parts.push(p);
    if (!f || f.species !== species.name) continue;
    const own = solved.find(
      (s) => classKey(s.own) === classKey(f) && inSteps(minus(f.cell.offset, s.own.cell.offset), s.law.steps),
    );
    if (!own || p.steps.some((m, d) => m > 0 && m % (own.law.steps[d] ?? 1) !== 0)) return undefined;
    if (f.pauli === fixedPauli(own.own.pauli)) continue;
    const at = translateString(own.law.string, minus(f.cell.offset, own.own.cell.offset));
    parts.push({ string: { ...at, phase: toPhase(at.phase + (law.value === 1 ? 0 : 2)) }, steps: p.steps, needs: [] });
  }
  const whole = canonicalExtended({ phase: extended.phase, parts }, { open: false });
  if (!solved.every((s) => commutesWithAll(s.law, extended))) return undefined;
  return { phase: whole.phase, parts: whole.parts.filter((p) => p.string.factors[0]?.species !== species.name) };
}

const commutesWithAll = (law: LawFamily, extended: Extended): boolean =>
  commuteWithExtended({ string: law.string, steps: law.steps }, extended).commutes === true;
