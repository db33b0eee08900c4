import { oddShifts, relativeSteps, inGroup } from '../algebra/pauli/overlaps.ts';
import type { Factor, Family, LocalString, Operator, Pauli, Steps } from '../algebra/pauli/types.ts';
import type { Kind } from '../contracts/report.ts';
import { cellKey, type Cell, type CellKind, type LatticeFamily } from '../lattice/cells.ts';
import { boundary } from '../lattice/incidence.ts';
import { incident } from './shapes.ts';

/** What a role depends on besides its own string: the whole model and the laws declared for its spins. */
export interface RoleContext {
  readonly family: LatticeFamily;
  readonly operator: Operator;
  /** Kind of cell of each species. */
  readonly species: ReadonlyMap<string, CellKind>;
  readonly laws: readonly { readonly string: LocalString; readonly steps: Steps }[];
}

/** One string, taken apart as the tests of the table need it. */
interface Anatomy {
  /** Factors on links: the gauge field. */
  readonly field: readonly Factor[];
  /** Factors on other cells: matter, or plain spins in a model without a gauge field. */
  readonly matter: readonly Factor[];
  readonly fieldPauli: Pauli | undefined;
  readonly matterPauli: Pauli | undefined;
  /** The field is the whole star of a vertex; the vertex. */
  readonly star: Cell | undefined;
  /** The field is the whole rim of a plaquette; the plaquette. */
  readonly rim: Cell | undefined;
  /** Whether the model has a gauge field at all. */
  readonly gauge: boolean;
  /** Pauli of the electric field (see `electricPauli`), where the model tells. */
  readonly electric: Pauli | undefined;
  /** Paulis of two-body terms of one species without field. */
  readonly exchanges: ReadonlySet<Pauli>;
  readonly family: LatticeFamily;
}

const only = (factors: readonly Factor[]): Pauli | undefined => {
  const [first] = factors;
  return first && factors.every((f) => f.pauli === first.pauli && f.species === first.species)
    ? first.pauli
    : undefined;
};

const sameCells = (a: readonly Cell[], b: readonly Cell[]): boolean => {
  const keys = new Set(a.map(cellKey));
  return a.length === b.length && b.every((c) => keys.has(cellKey(c)));
};

/** The cell of `kind` whose links these are, if there is one. */
function around(field: readonly Factor[], kind: CellKind, family: LatticeFamily): Cell | undefined {
  const [first] = field;
  if (!first || field.length < 2 || family[kind].length === 0) return undefined;
  const cells = field.map((f) => f.cell);
  return incident(family, first.cell, kind).find((c) => sameCells(incident(family, c, 'links'), cells));
}

/** The field's links have exactly the matter's vertices as their ends (mod 2), or its plaquettes as their sides. */
function joins(a: Anatomy): boolean {
  const kind = a.matter[0]?.cell.kind;
  if (!kind || a.field.length === 0 || a.matter.some((f) => f.cell.kind !== kind)) return false;
  const odd = new Map<string, Cell>();
  for (const f of a.field) {
    const ends =
      kind === 'vertices' ? boundary(a.family, f.cell) : kind === 'plaquettes' ? incident(a.family, f.cell, kind) : [];
    for (const c of ends) if (!odd.delete(cellKey(c))) odd.set(cellKey(c), c);
  }
  return sameCells(
    [...odd.values()],
    a.matter.map((f) => f.cell),
  );
}

export interface Role {
  readonly kind: Kind;
  readonly help: string;
  readonly is: (a: Anatomy) => boolean;
}

const bare = (a: Anatomy): boolean => a.matter.length === 0 && a.fieldPauli !== undefined;

/**
 * The roles of terms in gauge language, decided by structure alone, on any lattice; the first that fits is the role.
 * The gauge field is what lives on links; matter lives elsewhere in a model that has a gauge field.
 */
export const roles: readonly Role[] = [
  {
    kind: 'Gauss',
    help: 'Matter at a vertex times the star of the field there, or matter at a plaquette times its rim.',
    is: (a) =>
      a.matter.length > 0 &&
      a.fieldPauli !== undefined &&
      [a.star, a.rim].some((c) => c !== undefined && a.matter.every((f) => cellKey(f.cell) === cellKey(c))),
  },
  {
    kind: 'matter hopping',
    help: 'Matter at both ends of a path of links, with the field along it.',
    is: (a) => a.fieldPauli !== undefined && a.matter.every((f) => f.species === a.matter[0]?.species) && joins(a),
  },
  {
    kind: 'star',
    help: 'The field on all links at a vertex, without matter.',
    is: (a) => bare(a) && a.star !== undefined,
  },
  {
    kind: 'magnetic',
    help: 'The field around a plaquette, in the Pauli matrix that moves the electric field.',
    is: (a) => bare(a) && a.rim !== undefined && a.fieldPauli !== a.electric,
  },
  {
    kind: 'electric',
    help: 'The field on one link, in the Pauli matrix that the law keeps.',
    is: (a) => bare(a) && a.field.length === 1 && (a.electric === undefined || a.fieldPauli === a.electric),
  },
  {
    kind: 'matter hopping',
    help: 'The field on one link in the Pauli matrix that breaks stars in pairs: hopping in the unitary gauge.',
    is: (a) => bare(a) && a.field.length === 1,
  },
  {
    kind: 'matter mass',
    help: 'Matter at one cell, in a model with a gauge field.',
    is: (a) => a.gauge && a.field.length === 0 && a.matter.length === 1,
  },
  {
    kind: 'Ising exchange',
    help: 'Two spins of one species in the same Pauli matrix, without a gauge field.',
    is: (a) => a.field.length === 0 && a.matter.length === 2 && a.matterPauli !== undefined,
  },
  {
    kind: 'transverse field',
    help: 'One spin, in a model without a gauge field, across its exchange.',
    is: (a) =>
      !a.gauge &&
      a.matter.length === 1 &&
      !(a.exchanges.size === 1 && a.matterPauli !== undefined && a.exchanges.has(a.matterPauli)),
  },
  { kind: 'other', help: 'None of these.', is: () => true },
];

const fieldOf = (s: LocalString): Factor[] => s.factors.filter((f) => f.cell.kind === 'links');
const matterOf = (s: LocalString): Factor[] => s.factors.filter((f) => f.cell.kind !== 'links');

const commute = (a: { string: LocalString; steps: Steps }, b: Family): boolean => {
  const group = relativeSteps(a.steps, b.steps);
  return oddShifts(a.string, b.string).every((s) => !inGroup(s, group));
};

/**
 * Pauli matrix of the electric field: that of a law which the model obeys and whose field is a star (Gauss) or, without one, a rim (a law
 * of no flux); without laws it is the single-link matrix of the model that differs from that of its plaquette terms. Undefined where
 * nothing tells: then every single-link term is electric.
 */
function electricPauli(context: RoleContext): Pauli | undefined {
  const obeyed = context.laws.filter((law) => context.operator.families.every((f) => commute(law, f)));
  for (const kind of ['vertices', 'plaquettes'] as const)
    for (const law of obeyed) {
      const field = fieldOf(law.string);
      const pauli = only(field);
      if (pauli && around(field, kind, context.family)) return pauli;
    }
  const families = context.operator.families.filter((f) => matterOf(f.string).length === 0);
  const rims = new Set(
    families.flatMap((f) => (around(fieldOf(f.string), 'plaquettes', context.family) ? [only(fieldOf(f.string))] : [])),
  );
  if (rims.size === 0) return undefined;
  const stars = families.flatMap((f) =>
    around(fieldOf(f.string), 'vertices', context.family) ? [only(fieldOf(f.string))] : [],
  );
  const star = stars.find((p) => p !== undefined && !rims.has(p));
  const single = families
    .flatMap((f) => (f.string.factors.length === 1 ? [only(f.string.factors)] : []))
    .find((p) => p !== undefined && !rims.has(p));
  return star ?? single;
}

/** The roles of all families of a model, in its order. */
export function rolesOf(context: RoleContext): Kind[] {
  const { family, operator } = context;
  const gauge =
    [...context.species.values()].includes('links') || operator.families.some((f) => fieldOf(f.string).length > 0);
  const electric = electricPauli(context);
  const exchanges = new Set(
    operator.families.flatMap((f) => {
      const matter = matterOf(f.string);
      const pauli = only(matter);
      return fieldOf(f.string).length === 0 && matter.length === 2 && pauli ? [pauli] : [];
    }),
  );
  return operator.families.map(({ string }) => {
    const [field, matter] = [fieldOf(string), matterOf(string)];
    const fieldPauli = only(field);
    const anatomy: Anatomy = {
      field,
      matter,
      fieldPauli,
      matterPauli: only(matter),
      star: fieldPauli && around(field, 'vertices', family),
      rim: fieldPauli && around(field, 'plaquettes', family),
      gauge,
      electric,
      exchanges,
      family,
    };
    if (string.factors.length === 0) return 'other';
    return roles.find((r) => r.is(anatomy))?.kind ?? 'other';
  });
}
