import { z } from 'zod';

/** The report of DESIGN.md section 5: what command line, worker and server return for one source. */

export const grades = ['proved', 'exact', 'numerical', 'refuted', 'open'] as const;
export type Grade = (typeof grades)[number];

export const kinds = [
  'electric',
  'magnetic',
  'star',
  'matter hopping',
  'matter mass',
  'Gauss',
  'Ising exchange',
  'transverse field',
  'other',
] as const;
export type Kind = (typeof kinds)[number];

export const orbitSchema = z.object({
  species: z.string(),
  /** Kind and class: "links.1", "vertices". */
  cell: z.string(),
  offset: z.array(z.number().int()),
  pauli: z.enum(['x', 'y', 'z']),
});

const supportSchema = z.object({ orbit: z.array(orbitSchema), steps: z.array(z.number().int()) });

export const refusalSchema = z.object({
  reason: z.string(),
  term: z.array(supportSchema),
  /** Empty where no symmetry is known. */
  symmetry: z.string(),
  charged: z.array(supportSchema),
  overlap: z.array(orbitSchema),
});
export type RefusalWitness = z.infer<typeof refusalSchema>;

/** A problem in the source. Lines and columns count from 1, in characters; `length` of the offending text. */
export const problemSchema = z.object({
  code: z.string(),
  message: z.string(),
  line: z.number().int(),
  column: z.number().int(),
  length: z.number().int(),
  /** The likely fix, in words; empty when none is near. */
  hint: z.string(),
  /** A replacement for the offending text, where the hint is one. */
  fix: z.string().optional(),
  /** What a map's refusal rests on, for the plate: the term, what it is charged under, and the spins where the two anticommute. */
  witness: refusalSchema.optional(),
  /** Cautions do not stop evaluation. */
  severity: z.enum(['error', 'caution']).default('error'),
});
export type Problem = z.infer<typeof problemSchema>;

export const termSchema = z.object({
  coefficient: z.string(),
  tex: z.string(),
  kind: z.enum(kinds),
  orbit: z.array(orbitSchema),
  /** Translation steps (0 pinned, m every m-th cell); all 1 unless staggered. */
  steps: z.array(z.number().int()),
  /** Spoken form. */
  spoken: z.string(),
  /** Number of the gathered sum (in `groups`) that this family belongs to. */
  group: z.number().int(),
  /** Number that the tables of the audits know this family by: its place in the operator, constants left out. */
  piece: z.number().int().optional(),
});
export type ReportTerm = z.infer<typeof termSchema>;

/** A gathered sum: families of one shape and coefficient, as the page and the TeX show them. */
export const groupSchema = z.object({
  tex: z.string(),
  kind: z.enum(kinds),
  spoken: z.string(),
  /** Place in the source of the text this came from (its own statement), for the caret; columns from 1. */
  place: z.object({ line: z.number().int(), column: z.number().int(), length: z.number().int() }).nullable(),
});

export const modelSchema = z.object({
  terms: z.array(termSchema),
  groups: z.array(groupSchema),
  tex: z.string(),
  spoken: z.string(),
  /** The constant, exact, as text; "0" if none. For each cell of the lattice, or absolute. */
  constant: z.string(),
  line: z.number().int(),
  species: z.array(z.string()),
  /** 'spin' or 'gauge': the page a model stands on. */
  language: z.enum(['spin', 'gauge']),
  /** Set when the model is the image N(M) of another: which group of it each group here comes from. */
  image: z
    .object({ map: z.string(), of: z.string(), pairs: z.array(z.tuple([z.number().int(), z.number().int()])) })
    .nullable(),
});
export type ReportModel = z.infer<typeof modelSchema>;

/** Everything else declared, set in type: laws, symmetries, operators, rules, maps, lattices. */
export const declarationSchema = z.object({
  name: z.string(),
  what: z.enum(['lattice', 'spins', 'couplings', 'operator', 'law', 'symmetry', 'rule', 'map', 'reference']),
  line: z.number().int(),
  tex: z.string(),
  spoken: z.string(),
  /** Supports for the plate: representative strings (one a class) with their translation steps. */
  supports: z.array(z.object({ orbit: z.array(orbitSchema), steps: z.array(z.number().int()) })),
  /** For maps: rules set one by one, left and right. */
  rules: z
    .array(
      z.object({
        left: z.string(),
        right: z.string(),
        leftOrbit: z.array(orbitSchema),
        rightOrbit: z.array(orbitSchema),
      }),
    )
    .optional(),
  language: z.enum(['spin', 'gauge', 'both']),
});
export type ReportDeclaration = z.infer<typeof declarationSchema>;

export const claimSchema = z.object({
  line: z.number().int(),
  audit: z.string(),
  subject: z.string(),
  statement: z.string(),
  /** The statement with its formulas as $…$ TeX, for the page. */
  tex: z.string(),
  grade: z.enum(grades),
  figures: z.record(z.string(), z.unknown()),
  witness: z.record(z.string(), z.unknown()),
  cautions: z.array(z.string()),
  /** What stands behind it: literature and method, in words. */
  sources: z.array(z.string()),
  /** Set on a claim that stands open because its answer is too costly here: the name by which a server can be asked for it. */
  question: z.string().optional(),
});
export type Claim = z.infer<typeof claimSchema>;

/** One row of a map's table of images: what a spin, operator, law or symmetry becomes, or why it has no image. */
export const imageSchema = z.object({
  map: z.string(),
  /** Line of the map. */
  line: z.number().int(),
  what: z.enum(['spin', 'operator', 'law', 'symmetry']),
  name: z.string(),
  /** A string at one place, a product of unbounded support, a sum, ±1 where it is used up; or none. */
  image: z.enum(['string', 'product', 'sum', 'constant', 'none']),
  left: z.string(),
  /** TeX of the image; empty where there is none. */
  right: z.string(),
  spoken: z.string(),
  /** Why there is none, and the symmetry under which it is charged; empty else. */
  reason: z.string(),
  symmetry: z.string(),
  /** Two copies, some cells apart, of what has no image alone: the string whose ends they are. */
  pair: z.object({ left: z.string(), right: z.string() }).nullable(),
  notes: z.array(z.string()),
  leftSupports: z.array(supportSchema),
  rightSupports: z.array(supportSchema),
});
export type ReportImage = z.infer<typeof imageSchema>;

/** A step that a model offers: statements to be added to the source as they stand. */
export const suggestionSchema = z.object({
  /** Line of the model. */
  line: z.number().int(),
  model: z.string(),
  what: z.enum(['declare', 'gauge', 'solve']),
  /** Why it fits, in one sentence. */
  words: z.string(),
  statements: z.array(z.string()),
});
export type Suggestion = z.infer<typeof suggestionSchema>;

export const reportSchema = z.object({
  format: z.literal('gaugewright-report/1'),
  engine: z.string(),
  problems: z.array(problemSchema),
  lattice: z
    .object({
      family: z.string(),
      boundary: z.enum(['torus', 'cylinder', 'open']),
      /** Periods in unit cells. */
      periods: z.array(z.array(z.number().int())),
      /** The family's geometry for the plate, as lattice/cells LatticeFamily. */
      geometry: z.unknown(),
      species: z.record(z.string(), z.string()),
    })
    .nullable(),
  models: z.record(z.string(), modelSchema),
  declarations: z.array(declarationSchema),
  claims: z.array(claimSchema),
  /** For each map, what becomes of spins, operators, laws and symmetries. */
  images: z.array(imageSchema).optional(),
  suggestions: z.array(suggestionSchema).optional(),
});
export type Report = z.infer<typeof reportSchema>;
