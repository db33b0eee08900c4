import type { Claim, Grade, Kind, ReportDeclaration } from '../../../shared/contracts/report.ts';
import type { Held, Ref } from '../../hand/hand.ts';

/** What the page shows, as plain values that are compared by value: rows, pairs of terms, marks. */

/** What the gutter says about a pair of terms: a grade and, for who cannot see the mark, its words. */
export interface Mark {
  readonly grade: Grade;
  readonly words: string;
}

export type Pauli = 'x' | 'y' | 'z';

export interface Term {
  readonly ref: Ref;
  readonly tex: string;
  readonly spoken: string;
  readonly kind: Kind;
  /** Which Pauli matrices stand in it, in the order x, y, z. */
  readonly paulis: readonly Pauli[];
  /** Where its source is: the entry, line (from 0) and column (from 1) in it. */
  readonly place: Spot | null;
}

export interface Spot {
  readonly entry: string;
  readonly line: number;
  readonly column: number;
}

export interface Pair {
  readonly left: Term | null;
  readonly right: Term | null;
  readonly mark: Mark | null;
}

/** The name a model is set under on one page, as TeX. */
export interface Head {
  readonly name: string;
  readonly tex: string;
  /** Said small beside it: where it comes from, when that is not the facing model. */
  readonly note: string | null;
}

export type Row =
  | {
      readonly what: 'terms';
      readonly key: string;
      readonly line: number;
      readonly stale: boolean;
      readonly left: Head | null;
      readonly right: Head | null;
      /** The map that leads from one to the other. */
      readonly map: string | null;
      readonly pairs: readonly Pair[];
    }
  | {
      readonly what: 'setting';
      readonly key: string;
      readonly line: number;
      readonly stale: boolean;
      readonly parts: readonly {
        readonly what: ReportDeclaration['what'];
        readonly tex: string;
        readonly spoken: string;
      }[];
    }
  | {
      readonly what: 'declaration';
      readonly key: string;
      readonly line: number;
      readonly stale: boolean;
      readonly declaration: ReportDeclaration;
      readonly held: Held;
      /** What is claimed of it, one mark a grade. */
      readonly marks: readonly Mark[];
    }
  | {
      /** A model that is set facing its source, in that one's entry. */
      readonly what: 'elsewhere';
      readonly key: string;
      readonly line: number;
      readonly stale: boolean;
      readonly name: string;
      readonly map: string;
      readonly of: string;
      readonly entry: string;
    }
  | {
      readonly what: 'claims';
      readonly key: string;
      readonly line: number;
      readonly stale: boolean;
      readonly audit: string;
      readonly claims: readonly Claim[];
    };

export interface EntryRows {
  readonly id: string;
  readonly rows: readonly Row[];
  /** The worst that is said in this entry: refuted, or a problem; else null. */
  readonly fails: 'refuted' | 'problem' | null;
}
