import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { Extended, LocalString, Operator, ProductPart, Site, Steps } from '../algebra/pauli/types.ts';
import type { Cell, CellKind, Lattice, Size } from '../lattice/cells.ts';
import type { Budget } from '../limits.ts';

/** What a name stands for once its statement is evaluated. All of it speaks of the infinite lattice. */

/** A place in the source; line and column count from 1. */
export interface Place {
  readonly line: number;
  readonly column: number;
  readonly length: number;
}

interface Named {
  readonly name: string;
  readonly place: Place;
  /** The declaration's text, as written. */
  readonly text: string;
}

export interface SpeciesValue extends Named {
  readonly what: 'spins';
  readonly kind: CellKind;
  /** Classes of the kind that carry this species, ascending. */
  readonly classes: readonly number[];
}

export interface CouplingValue extends Named {
  readonly what: 'coupling';
  /** Undefined while symbolic. Constant (no symbols) when given. */
  readonly value: Coefficient | undefined;
}

/** One signed Pauli product standing at `anchor` and translated by `steps`. */
export interface LawFamily {
  readonly string: LocalString;
  readonly steps: Steps;
  readonly needs: readonly Cell[];
  readonly anchor: Cell;
}

/** A declared parameter `v: vertices where …`, as classes and residues. */
export interface Parameter {
  readonly variable: string;
  readonly kind: CellKind;
}

export interface OperatorValue extends Named {
  readonly what: 'operator';
  readonly parameter: Parameter | undefined;
  /** Without parameter: the operator. With: the operator standing for the cell at the origin (first class). */
  readonly operator: Operator;
  /** With a parameter: the operator at a cell (pinned). Throws ProblemError when the cell is not in its domain. */
  readonly at: ((cell: Cell, budget: Budget) => Operator) | undefined;
}

export interface ModelValue extends Named {
  readonly what: 'model';
  readonly operator: Operator;
  /** Species that occur in it; `extra`: those it was declared to live on besides, by its map. */
  readonly species: readonly string[];
  /** Set when declared as exactly `N(M)`, possibly plus further terms. */
  readonly image: { readonly map: string; readonly of: string } | undefined;
  /** For each top-level piece of the expression: its place and the operator it expands to, in order. */
  readonly pieces: readonly { readonly place: Place; readonly operator: Operator }[];
  /** Seams: symmetry and direction of each `twist`. */
  readonly seams: readonly { readonly symmetry: Extended; readonly direction: number }[];
}

export interface LawValue extends Named {
  readonly what: 'law';
  readonly parameter: Parameter;
  /** Declared value, `is ±1`. */
  readonly value: 1 | -1;
  readonly families: readonly LawFamily[];
}

export interface SymmetryValue extends Named {
  readonly what: 'symmetry';
  readonly extended: Extended;
}

export interface RuleValue extends Named {
  readonly what: 'rule';
  readonly parameter: Parameter;
  /** One diagonal operator a class and residue: families pinned, Z strings only. */
  readonly families: readonly {
    readonly operator: Operator;
    readonly steps: Steps;
    readonly needs: readonly Cell[];
    readonly anchor: Cell;
  }[];
  readonly relation: '==' | '<=' | '>=' | 'even' | 'odd';
  readonly bound: Coefficient;
}

export interface ReferenceValue extends Named {
  readonly what: 'reference';
  readonly state:
    | { readonly kind: 'uniform'; readonly rules: readonly string[] }
    | { readonly kind: 'stabilizer'; readonly laws: readonly string[] };
}

// ------------------------------------------------------------------ maps

/** One side of a dictionary rule: a signed Pauli product, local (translated with the rule) or extended (a global generator). */
export interface DictionaryRule {
  readonly left: LocalString | Extended;
  readonly right: LocalString | Extended;
  /** Translations of the rule: both sides move together. All 0 for a global generator. */
  readonly steps: Steps;
  readonly needs: readonly Cell[];
  readonly anchor: Cell | undefined;
  readonly place: Place;
  /** Number of the source line of the map this came from (several classes share one). */
  readonly rule: number;
  /** The two sides as written. */
  readonly text: { readonly left: string; readonly right: string };
}

export interface CircuitLayer {
  readonly gate: string;
  /** Target spins of one gate for each class and residue; all translates by `steps` are applied. */
  readonly gates: readonly {
    readonly targets: readonly Site[];
    readonly steps: Steps;
    readonly needs: readonly Cell[];
  }[];
  readonly place: Place;
}

export interface StateRule {
  /** Bits of the source block, in the order of the listed spins. */
  readonly bits: string;
  /** Amplitudes of the image by bit string of the target block. */
  readonly amplitudes: ReadonlyMap<string, Coefficient>;
  readonly place: Place;
}

export interface StateBlock {
  /** Source and target spins of the block standing at `anchor`; translated by `steps`. */
  readonly from: readonly Site[];
  readonly to: readonly Site[];
  readonly steps: Steps;
  readonly anchor: Cell;
}

export type MapDeclaration =
  | {
      readonly kind: 'dictionary';
      readonly from: readonly string[];
      readonly to: readonly string[];
      readonly rules: readonly DictionaryRule[];
    }
  | { readonly kind: 'gauge'; readonly symmetry: SymmetryValue; readonly gauge: SpeciesValue }
  | { readonly kind: 'circuit'; readonly layers: readonly CircuitLayer[] }
  | { readonly kind: 'solve'; readonly law: LawValue; readonly species: SpeciesValue }
  | {
      readonly kind: 'states';
      readonly blocks: readonly StateBlock[];
      readonly rules: readonly StateRule[];
      readonly from: readonly string[];
      readonly to: readonly string[];
    }
  | { readonly kind: 'then'; readonly first: MapValue; readonly second: MapValue }
  | { readonly kind: 'inverse'; readonly of: MapValue };

/** Why a map refuses an operator. `reason` is a sentence; `term` the offending piece; `symmetry` one under which it is charged. */
export interface Refusal {
  readonly reason: string;
  readonly term: LocalString | Extended | undefined;
  readonly symmetry: { readonly text: string; readonly extended: Extended | undefined } | undefined;
}

export type Outcome<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly refusal: Refusal };

/** A map as others use it. Built from its declaration by `maps/registry`. */
export interface OperatorMap {
  readonly kind: MapDeclaration['kind'];
  /** Species on either side; empty `from` means: any (circuit). */
  readonly from: readonly string[];
  readonly to: readonly string[];
  /** Image of an operator; refuses with the reason when a term has none. */
  image(operator: Operator, budget: Budget): Outcome<Operator>;
  /** Image of a product string of unbounded support. */
  imageExtended(extended: Extended, budget: Budget): Outcome<Extended>;
  /** Laws that the map declares (`N.gauss`), by the word after the dot. */
  readonly laws: ReadonlyMap<string, LawValue>;
  /** Sentences that hold of the image: "modulo flat", leaking terms. */
  readonly cautions: (operator: Operator, budget: Budget) => readonly string[];
}

export interface MapValue extends Named {
  readonly what: 'map';
  readonly declaration: MapDeclaration;
  readonly map: OperatorMap;
}

export type Value =
  | SpeciesValue
  | CouplingValue
  | OperatorValue
  | ModelValue
  | LawValue
  | SymmetryValue
  | RuleValue
  | ReferenceValue
  | MapValue;

/** All that was declared before a statement. `find` also resolves `N.gauss`. */
export interface Values {
  readonly lattice: Lattice | undefined;
  readonly all: ReadonlyMap<string, Value>;
  find(name: string): Value | undefined;
}

// ------------------------------------------------------------------ audits, checked

/** One label of a sector: `flat = +1`, `w1`, a rule, or the name of a state map (its image). */
export interface SectorLabel {
  readonly name: string;
  /** Undefined: the declared value. */
  readonly value: 1 | -1 | undefined;
  readonly place: Place;
}

export interface Subject {
  readonly name: string;
  readonly sector: readonly SectorLabel[];
  readonly place: Place;
}

export interface ScanRange {
  readonly coupling: string;
  /** Points of the grid, exact. One point when fixed (`J = 1`). */
  readonly points: readonly Coefficient[];
}

/** A checked audit line: names resolved, clauses in place. Absent clauses are undefined or empty. */
export interface AuditStatement {
  readonly audit: string;
  readonly place: Place;
  readonly text: string;
  /** What is audited, in order: `audit laws A, B` has two. */
  readonly subjects: readonly Subject[];
  /** After `with`. */
  readonly withNames: readonly string[];
  /** After `~`. */
  readonly against: Subject | undefined;
  /** After `on`; empty: the declared size. */
  readonly sizes: readonly Size[];
  readonly levels: number | undefined;
  readonly order: number | undefined;
  /** Name after `from` (effective). */
  readonly from: string | undefined;
  /** scan: gap, energy, overlap, or the name of an operator; with its reference state. */
  readonly quantity: string | undefined;
  readonly reference: string | undefined;
  readonly over: readonly ScanRange[];
}

/** A part of an extended product as it stands in models and symmetries. */
export type { ProductPart };
