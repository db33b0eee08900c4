import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import { collect } from '../algebra/pauli/family.ts';
import { oddShifts } from '../algebra/pauli/overlaps.ts';
import { multiplyStrings, newString, stringKey } from '../algebra/pauli/string.ts';
import type {
  Extended,
  Factor,
  Family,
  LocalString,
  Operator,
  Pauli,
  ProductPart,
  Steps,
} from '../algebra/pauli/types.ts';
import { cellKey, shifted, type Cell } from '../lattice/cells.ts';
import { around, incidence } from '../lattice/incidence.ts';
import type { Budget } from '../limits.ts';
import type { LawFamily, LawValue, MapDeclaration, OperatorMap, Outcome } from '../language/values.ts';
import type { Context } from './context.ts';
import { fewestLinks } from './paths.ts';
import { extendedPhrase, stringPhrase } from './phrases.ts';
import { allowed, MapRefused, refused } from './refusals.ts';
import { inSteps, minus, mod, refined, residues } from './steps.ts';

type GaugingDeclaration = Extract<MapDeclaration, { kind: 'gauge' }>;

/** What the symmetry does on the vertices: its Pauli matrices, class by class and residue by residue. */
interface OnSite {
  readonly species: string;
  readonly index: number;
  readonly offset: readonly number[];
  readonly steps: Steps;
  readonly pauli: Pauli;
}

/** The symmetry as one Pauli matrix on each of its spins; refused unless it is that, on vertices, everywhere on its sublattice. */
function onSite({ symmetry }: GaugingDeclaration): OnSite[] {
  const name = symmetry.name;
  const whole = canonicalExtended(symmetry.extended, { open: false });
  if (whole.phase % 2 === 1 || whole.parts.length === 0)
    throw new MapRefused(`${name} is not an on-site symmetry: it has no Pauli matrix on any vertex`);
  const seen = new Set<string>();
  return whole.parts.map((p) => {
    const [f, ...more] = p.string.factors;
    if (!f || more.length > 0)
      throw new MapRefused(`${name} is not an on-site symmetry: it carries a sign or a string for each cell`);
    if (f.cell.kind !== 'vertices')
      throw new MapRefused(
        `${name} acts on ${f.cell.kind}; only a symmetry of spins on vertices is gauged with a field on links`,
      );
    if (p.steps.some((m) => m === 0))
      throw new MapRefused(
        `${name} acts on a line or a point of the lattice only; an on-site symmetry acts throughout a sublattice`,
      );
    const key = `${f.species} ${cellKey({ ...f.cell, offset: f.cell.offset.map((c, d) => mod(c, p.steps[d] ?? 1)) })} ${p.steps.join(',')}`;
    if (seen.has(key)) throw new MapRefused(`${name} acts twice on one spin`);
    seen.add(key);
    return { species: f.species, index: f.cell.index, offset: f.cell.offset, steps: p.steps, pauli: f.pauli };
  });
}

/**
 * Minimal coupling of an on-site Z2 symmetry to a gauge field on links (F. Wegner, J. Math. Phys. 12, 2259 (1971); J. Kogut,
 * Rev. Mod. Phys. 51, 659 (1979)). A term keeps its matter and gains g^z on links that join its charges pairwise: a fewest number of them,
 * any two choices differing by fluxes. Charge at v: whether the term anticommutes with P(v). The law is P(v) prod(l: star(v)) g^x[l] = +1.
 */
export function gaugingMap(declaration: GaugingDeclaration, context: Context): OperatorMap {
  const { symmetry, gauge } = declaration;
  const { family, open } = context;
  if (gauge.kind !== 'links')
    throw new MapRefused(`${gauge.name} lives on ${gauge.kind}; a gauge field lives on links`);
  const sites = onSite(declaration);
  const matter = [...new Set(sites.map((s) => s.species))];
  if (matter.includes(gauge.name)) throw new MapRefused(`${gauge.name} cannot be its own gauge field`);
  const hasField = (l: Cell) => gauge.classes.includes(l.index);
  const law = gaussLaw(sites, context, declaration);

  const charge = (f: Factor): boolean =>
    sites.some(
      (s) =>
        s.species === f.species &&
        s.index === f.cell.index &&
        inSteps(minus(f.cell.offset, s.offset), s.steps) &&
        s.pauli !== f.pauli,
    );

  /** Vertices where the string anticommutes with the symmetry's own factors. */
  const charges = (s: LocalString): Cell[] => {
    const odd = new Map<string, Cell>();
    for (const f of s.factors)
      if (f.cell.kind === 'vertices' && charge(f) && !odd.delete(cellKey(f.cell))) odd.set(cellKey(f.cell), f.cell);
    return [...odd.values()];
  };

  const known = new Map<string, Outcome<readonly Cell[]>>();
  const links = (string: LocalString, budget: Budget): Outcome<readonly Cell[]> => {
    const at = charges(string);
    if (at.length === 0) return allowed([]);
    const phrase = stringPhrase({ phase: 0, factors: string.factors }, family);
    if (at.length % 2 === 1)
      return refused(
        `${phrase} is charged: it anticommutes with ${symmetry.name} = ${extendedPhrase(symmetry.extended, family)}, so no product of field operators makes it gauge invariant`,
        string,
        {
          text: symmetry.name,
          extended: symmetry.extended,
        },
      );
    const path = fewestLinks(at, family, hasField, budget);
    return path
      ? allowed(path)
      : refused(`no path of links that carry ${gauge.name} joins the charges of ${phrase}`, string);
  };

  /** The string with its field; a string that already holds the field passes if it obeys the law. */
  const dress = (string: LocalString, budget: Budget): Outcome<LocalString> => {
    if (string.factors.some((f) => f.species === gauge.name)) {
      const broken = law.families.some((f) => oddShifts(string, f.string).some((by) => inSteps(by, f.steps)));
      return broken
        ? refused(
            `${stringPhrase(string, family)} holds ${gauge.name} already and does not commute with ${context.name}.gauss`,
            string,
          )
        : allowed(string);
    }
    const key = stringKey({ phase: 0, factors: string.factors });
    const path = known.get(key) ?? links(string, budget);
    known.set(key, path);
    if (!path.ok) return path;
    return allowed(
      multiplyStrings(
        string,
        newString(path.value.map((cell) => ({ species: gauge.name, cell, pauli: 'z' as const }))),
      ),
    );
  };

  const periods = sites.map((s) => s.steps);
  const familyImage = (f: Family, budget: Budget): Outcome<Family[]> => {
    if (f.string.factors.length === 0) return allowed([f]);
    const steps = refined(f.steps, periods);
    const out: Family[] = [];
    for (const by of residues(f.steps, steps)) {
      const string = { ...f.string, factors: f.string.factors.map((x) => ({ ...x, cell: shifted(x.cell, by) })) };
      const image = dress(string, budget);
      if (!image.ok) return image;
      out.push({ ...f, string: image.value, steps, needs: f.needs.map((c) => shifted(c, by)) });
    }
    return allowed(out);
  };

  const imageExtended = (extended: Extended, budget: Budget): Outcome<Extended> => {
    const parts: ProductPart[] = [];
    for (const p of extended.parts) {
      const image = familyImage({ coefficient: one, string: p.string, steps: p.steps, needs: p.needs }, budget);
      if (!image.ok)
        return refused(
          `${extendedPhrase(extended, family)}: ${image.refusal.reason}`,
          extended,
          image.refusal.symmetry,
        );
      parts.push(...image.value.map(({ string, steps, needs }) => ({ string, steps, needs })));
    }
    return allowed(canonicalExtended({ phase: extended.phase, parts }, { open, budget }));
  };

  return {
    kind: 'gauge',
    from: matter,
    to: [...matter, gauge.name],
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
    laws: new Map([['gauss', law]]),
    cautions(operator, budget) {
      const long = operator.families.filter((f) => {
        const path = links(f.string, budget);
        return path.ok && path.value.length > 1;
      });
      return long.map(
        (f) =>
          `${stringPhrase({ phase: 0, factors: f.string.factors }, family)} is joined along a shortest path of links${family.plaquettes.length > 0 ? '; other paths differ by products of fluxes' : ''}`,
      );
    },
  };
}

const one = Coefficient.one;

/** P(v) times the star of the field, at every vertex that has either. */
function gaussLaw(
  sites: readonly OnSite[],
  { family, name }: Context,
  { symmetry, gauge }: GaugingDeclaration,
): LawValue {
  const all = family.vectors.map(() => 1);
  const steps = refined(
    all,
    sites.map((s) => s.steps),
  );
  const { star } = incidence(family);
  const families = family.vertices.flatMap((_, index) =>
    residues(all, steps).flatMap((offset): LawFamily[] => {
      const anchor: Cell = { kind: 'vertices', index, offset };
      const own = sites
        .filter((s) => s.index === index && inSteps(minus(offset, s.offset), s.steps))
        .map((s): Factor => ({ species: s.species, cell: anchor, pauli: s.pauli }));
      const links = around(star, anchor).filter((l) => gauge.classes.includes(l.index));
      const string = newString([
        ...own,
        ...links.map((cell): Factor => ({ species: gauge.name, cell, pauli: 'x', optional: true })),
      ]);
      return string.factors.length === 0 ? [] : [{ string, steps, needs: [anchor], anchor }];
    }),
  );
  return {
    what: 'law',
    name: `${name}.gauss`,
    place: symmetry.place,
    text: '',
    parameter: { variable: 'v', kind: 'vertices' },
    value: 1,
    families: merged(families, steps),
  };
}

/** Families whose residues all look alike are written with unit steps. */
function merged(families: readonly LawFamily[], steps: Steps): LawFamily[] {
  if (steps.every((m) => m === 1)) return [...families];
  const unit = steps.map(() => 1);
  const byClass = new Map<number, LawFamily[]>();
  for (const f of families) byClass.set(f.anchor.index, [...(byClass.get(f.anchor.index) ?? []), f]);
  return [...byClass.values()].flatMap((own) => {
    const shape = (f: LawFamily) =>
      stringKey({
        phase: f.string.phase,
        factors: f.string.factors.map((x) => ({
          ...x,
          cell: { ...x.cell, offset: minus(x.cell.offset, f.anchor.offset) },
        })),
      });
    const [first] = own;
    const alike =
      first && own.length === steps.reduce((n, m) => n * m, 1) && own.every((f) => shape(f) === shape(first));
    return alike ? [{ ...first, steps: unit }] : own;
  });
}

/** Terms that a gauged model may gain without breaking the law: one flux for each kind of plaquette, as text of the language. */
export function offeredFluxes(declaration: GaugingDeclaration, context: Pick<Context, 'family'>): string[] {
  const { gauge } = declaration;
  const { family } = context;
  const whole =
    family.plaquettes.length > 0 && family.plaquettes.every((p) => p.rim.every((l) => gauge.classes.includes(l.index)));
  return whole ? [`sum(p: plaquettes) prod(l: rim(p)) ${gauge.name}^z[l]`] : [];
}
