/**
 * The nodes that the grammar builds: what was written, with its place, and no meaning.
 * `start` and `end` are character offsets in the text of the node's statement (end exclusive), so that a statement
 * that moves in its source keeps its nodes.
 */
export interface Span {
  readonly start: number;
  readonly end: number;
}

/** A word or a number after a dot, in its one spelling. */
export interface Word extends Span {
  readonly text: string;
}

/** `s`, `l.a`, `plaquettes.hexagon`, `N.gauss`. Never empty. */
export interface Path extends Span {
  readonly words: readonly Word[];
}

export type SpinOperator = 'x' | 'y' | 'z' | 'n' | '+' | '-';

export type Expression =
  | NumberNode
  | ImaginaryNode
  | NameNode
  | CallNode
  | SpinNode
  | KetNode
  | BracketNode
  | TupleNode
  | RootNode
  | PowerNode
  | ProductNode
  | BigNode
  | SumNode;

export interface NumberNode extends Span {
  readonly type: 'number';
  readonly text: string;
}
/** `2i`; `text` is the number before the i. */
export interface ImaginaryNode extends Span {
  readonly type: 'imaginary';
  readonly text: string;
}
export interface NameNode extends Span {
  readonly type: 'name';
  readonly path: Path;
}
/** A name followed by brackets: a call, or a product where the name is a coupling. */
export interface CallNode extends Span {
  readonly type: 'call';
  readonly path: Path;
  readonly args: readonly Expression[];
}
/** `s^x[v]` */
export interface SpinNode extends Span {
  readonly type: 'spin';
  readonly species: Word;
  readonly operator: SpinOperator;
  readonly cell: Expression;
}
/** `|01>` */
export interface KetNode extends Span {
  readonly type: 'ket';
  readonly bits: string;
}
export interface BracketNode extends Span {
  readonly type: 'bracket';
  readonly body: Expression;
}
/** Two entries or more. */
export interface TupleNode extends Span {
  readonly type: 'tuple';
  readonly items: readonly Expression[];
}
export interface RootNode extends Span {
  readonly type: 'sqrt';
  readonly body: Expression;
}
export interface PowerNode extends Span {
  readonly type: 'power';
  readonly base: Expression;
  readonly exponent: Expression;
}
export interface Factor {
  /** Before the factor; the first one has `''`. Juxtaposition is `''` too. */
  readonly join: '' | '*' | '/' | '%';
  readonly sign: '' | '+' | '-';
  readonly factor: Expression;
}
/** Left to right, one level. Two factors or more, or one with a sign. */
export interface ProductNode extends Span {
  readonly type: 'product';
  readonly factors: readonly Factor[];
}
/** `sum(v: vertices) body`, `prod(…) body`. */
export interface BigNode extends Span {
  readonly type: 'big';
  readonly which: 'sum' | 'prod';
  readonly binders: readonly Binder[];
  readonly body: Expression;
}
export interface Term {
  readonly sign: '' | '+' | '-';
  readonly term: Expression;
}
/** Two terms or more, or `+ hc` behind one. */
export interface SumNode extends Span {
  readonly type: 'sum';
  readonly terms: readonly Term[];
  readonly hc: Span | undefined;
}

export interface Binder extends Span {
  readonly variable: Word;
  readonly domain: Expression;
  readonly where: Condition | undefined;
}

export type Comparison = '==' | '!=' | '<' | '<=' | '>' | '>=';
export type Condition =
  | (Span & {
      readonly type: 'compare';
      readonly operator: Comparison;
      readonly left: Expression;
      readonly right: Expression;
    })
  | (Span & {
      readonly type: 'in';
      readonly left: Expression;
      readonly set: Expression;
      readonly negated: boolean;
    })
  | (Span & { readonly type: 'not'; readonly body: Condition })
  | (Span & { readonly type: 'and' | 'or'; readonly left: Condition; readonly right: Condition })
  | (Span & { readonly type: 'group'; readonly body: Condition });

// ------------------------------------------------------------------ statements

/** `G(v: vertices)` or `G`. */
export interface Head extends Span {
  readonly name: Word;
  readonly parameter: Binder | undefined;
}

/** `3 x 3` (counts) or one of the rows of a size given by its periods. */
export type SizeItem =
  | (Span & { readonly type: 'counts'; readonly counts: readonly number[] })
  | (Span & { readonly type: 'row'; readonly row: readonly number[] });

/** `s[v]` in circuits and state maps. */
export interface SpinPlace extends Span {
  readonly species: Word;
  readonly cell: Expression;
}

export type CustomLine =
  | (Span & { readonly type: 'cell'; readonly vectors: readonly (readonly Expression[])[] })
  | (Span & { readonly type: 'vertex'; readonly label: Word; readonly position: readonly Expression[] })
  | (Span & {
      readonly type: 'link';
      readonly label: Word | undefined;
      readonly a: CustomCell;
      readonly b: CustomCell;
    })
  | (Span & {
      readonly type: 'plaquette' | 'cube';
      readonly label: Word | undefined;
      readonly parts: readonly CustomCell[];
    })
  | (Span & {
      readonly type: 'size';
      readonly size: readonly SizeItem[];
      readonly boundary: Word | undefined;
    });
export interface CustomCell extends Span {
  readonly label: Word;
  readonly shift: readonly number[] | undefined;
}

export type Rule =
  | (Span & {
      readonly type: 'dictionary';
      readonly left: Expression;
      readonly right: Expression;
      readonly binders: readonly Binder[];
    })
  | (Span & {
      readonly type: 'gate';
      readonly gate: Word;
      readonly targets: readonly SpinPlace[];
      readonly binders: readonly Binder[];
    });

export type MapExpression =
  | (Span & { readonly type: 'map'; readonly path: Path })
  | (Span & { readonly type: 'inverse'; readonly of: MapExpression })
  | (Span & { readonly type: 'then'; readonly first: MapExpression; readonly second: MapExpression });

export interface SubjectNode extends Span {
  readonly path: Path;
  readonly sector: readonly LabelNode[];
}
export interface LabelNode extends Span {
  readonly path: Path;
  /** As written after `=`, with its sign; undefined without `=`. */
  readonly value: number | undefined;
}
export interface RangeNode extends Span {
  readonly coupling: Word;
  readonly from: Expression;
  readonly to: Expression | undefined;
  readonly by: Expression | undefined;
}

export type ClauseName = 'with' | 'on' | 'levels' | '~' | 'in ground of' | 'of' | 'over' | 'order' | 'from';
export type Clause = Span &
  (
    | { readonly name: 'with'; readonly paths: readonly Path[] }
    | { readonly name: 'on'; readonly sizes: readonly SizeItem[] }
    | { readonly name: 'levels' | 'order'; readonly number: NumberNode }
    | { readonly name: '~' | 'in ground of' | 'of'; readonly subject: SubjectNode }
    | { readonly name: 'over'; readonly ranges: readonly RangeNode[] }
    | { readonly name: 'from'; readonly path: Path }
  );

export type Statement = Span &
  (
    | {
        readonly type: 'lattice';
        readonly family: Word;
        readonly boundary: Word | undefined;
        readonly size: readonly SizeItem[];
      }
    | { readonly type: 'custom lattice'; readonly lines: readonly CustomLine[] }
    | { readonly type: 'spins'; readonly names: readonly Word[]; readonly cells: Path }
    | {
        readonly type: 'couplings';
        readonly items: readonly { readonly name: Word; readonly value: Expression | undefined }[];
      }
    | { readonly type: 'model'; readonly head: Head; readonly body: Expression }
    | { readonly type: 'operator'; readonly head: Head; readonly body: Expression }
    | { readonly type: 'symmetry'; readonly head: Head; readonly body: Expression }
    | {
        readonly type: 'law';
        readonly head: Head;
        readonly body: Expression;
        readonly value: Expression | undefined;
      }
    | {
        readonly type: 'rule';
        readonly head: Head;
        readonly body: Expression;
        readonly relation: '==' | '<=' | '>=' | 'even' | 'odd' | undefined;
        readonly bound: Expression | undefined;
      }
    | {
        readonly type: 'reference';
        readonly name: Word;
        readonly kind: 'uniform' | 'stabilizer';
        readonly paths: readonly Path[];
      }
    | {
        readonly type: 'dictionary';
        readonly name: Word;
        readonly from: readonly Word[];
        readonly to: readonly Word[];
        readonly rules: readonly Rule[];
      }
    | {
        readonly type: 'gauge';
        readonly name: Word;
        readonly symmetry: Path;
        readonly gauge: Word;
        readonly cells: Path;
      }
    | { readonly type: 'circuit'; readonly name: Word; readonly rules: readonly Rule[] }
    | { readonly type: 'solve'; readonly name: Word; readonly law: Path; readonly species: Word }
    | {
        readonly type: 'states';
        readonly name: Word;
        readonly binder: Binder;
        readonly from: readonly SpinPlace[];
        readonly to: readonly SpinPlace[];
        readonly rules: readonly (Span & { readonly bits: KetNode; readonly image: Expression })[];
      }
    | { readonly type: 'composition'; readonly name: Word; readonly map: MapExpression }
    | {
        readonly type: 'audit';
        readonly audit: Word;
        readonly subjects: readonly SubjectNode[];
        readonly clauses: readonly Clause[];
      }
  );
