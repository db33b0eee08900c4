import { z } from 'zod';
import { row } from './row.ts';

/** What a worked derivation is picked by: each list is also the order in which a page offers it. */
export const workedLattices = ['chain', 'square', 'honeycomb', 'cubic'] as const;
export const workedSymmetries = [
  'global flip',
  'gauge law',
  'rows and columns',
  'conserved plaquettes',
  'none',
] as const;
export const workedHands = [
  'a spin model',
  'a gauge theory',
  'a stabilizer code',
  'states with a rule',
  'two spectra that differ',
] as const;

const nameSchema = z.string().regex(/^[a-z][a-z-]{0,60}$/);

/** One worked derivation of the catalogue. `sources` are printed as they stand, the first is the one it follows. */
export const workedSchema = z.object({
  name: nameSchema,
  title: z.string(),
  /** What it shows, in one sentence. */
  shows: z.string(),
  lattice: z.enum(workedLattices),
  symmetry: z.enum(workedSymmetries),
  /** What one has in hand when one turns to it. */
  hand: z.enum(workedHands),
  sources: z.array(z.object({ citation: z.string(), doi: z.string() })).min(1),
});
export type Worked = z.infer<typeof workedSchema>;

/** The rows about the catalogue. A part of `endpoints`. */
export const catalogueRows = {
  /** All worked derivations, without their texts. */
  listWorked: row('GET /api/catalogue', {
    action: 'visit',
    of: 'installation',
    answer: z.object({ items: z.array(workedSchema) }),
  }),
  /** One of them with its text, which `importNotebook` takes as it stands. */
  getWorked: row('GET /api/catalogue/:worked', {
    action: 'visit',
    of: 'installation',
    params: z.object({ worked: nameSchema }),
    answer: workedSchema.extend({ source: z.string() }),
  }),
} as const;
