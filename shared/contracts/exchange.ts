import { z } from 'zod';
import { entryKindSchema } from './notebooks.ts';
import { reportSchema } from './report.ts';

/** A notebook as a JSON file: what the export `json` writes and an upload reads. Its JSON Schema is published. */
export const notebookFileSchema = z.object({
  format: z.literal('gaugewright-notebook/1'),
  title: z.string().min(1).max(200),
  authors: z.array(z.string().min(1).max(120)).max(50).default([]),
  /** The steps of the notebook in their order. */
  entries: z.array(z.object({ kind: entryKindSchema, text: z.string() })).max(2000),
  /** Where it comes from; left out or null for a working text. Not read by an upload. */
  edition: z
    .object({
      number: z.number().int(),
      hash: z.string(),
      publishedAt: z.string(),
      /** The permanent address. */
      address: z.string(),
    })
    .nullish(),
  /** What the engine says about it, claims with their grades included. Not read by an upload: claims are computed anew. */
  report: reportSchema.nullish(),
});
export type NotebookFile = z.infer<typeof notebookFileSchema>;

/** The JSON Schema (draft 2020-12) of that file. */
export const notebookJsonSchema = (): Record<string, unknown> & { $schema: string } => ({
  title: 'Gaugewright notebook',
  ...z.toJSONSchema(notebookFileSchema, { io: 'input', unrepresentable: 'any' }),
  $schema: 'https://json-schema.org/draft/2020-12/schema',
});

/** A model on a finite cluster, as data that needs no engine: each Pauli string by the sites it acts on. */
export interface ClusterModel {
  readonly name: string;
  /** "square lattice, 3 x 3 torus". */
  readonly cluster: string;
  /** For each site, from 0: what stands there, "g[links.1(0, 2)]". */
  readonly sites: readonly string[];
  readonly strings: readonly {
    /** Exact, as text of the operator language with the couplings' values put in. */
    readonly exact: string;
    readonly re: number;
    readonly im: number;
    /** Sites ascend. */
    readonly paulis: readonly { readonly site: number; readonly letter: 'X' | 'Y' | 'Z' }[];
  }[];
}

/** A circuit on a finite cluster: gates by their names in OpenQASM 3, in order. */
export interface ClusterCircuit {
  readonly name: string;
  readonly cluster: string;
  readonly sites: readonly string[];
  readonly gates: readonly { readonly gate: string; readonly sites: readonly number[] }[];
}
