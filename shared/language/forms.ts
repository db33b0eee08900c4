import type { ClauseName } from '../../grammar/syntax.ts';
import type { Value } from './values.ts';

type What = Value['what'];

/**
 * How a line of one audit is written. `check` holds a line against its form; help and completion read the same record.
 * `subject`: where its subjects stand: as a list behind the audit's name, or behind `of` or `in ground of`.
 */
export interface AuditForm {
  readonly name: string;
  readonly help: string;
  readonly example: string;
  readonly subject: 'list' | 'of' | 'in ground of';
  /** Whether several subjects may be listed. */
  readonly many: boolean;
  /** What the subjects may be. */
  readonly operands: readonly What[];
  /** Whether a subject may stand in a sector. */
  readonly sector: boolean;
  /** A word or name before the subject: what is measured. */
  readonly quantity: { readonly words: readonly string[]; readonly kinds: readonly What[] } | undefined;
  /** Clauses beside that of the subject: needed, or may stand. */
  readonly clauses: Partial<Readonly<Record<ClauseName, 'need' | 'may'>>>;
  /** What the names behind `with` and `from` may be. */
  readonly withKinds: readonly What[];
}

const operators: readonly What[] = ['model', 'operator', 'symmetry'];
const none = { quantity: undefined, withKinds: [] };

/** All audits of the language, in the order in which help lists them. */
export const auditForms: readonly AuditForm[] = [
  {
    ...none,
    name: 'commute',
    help: 'Does the operator commute with the laws, term by term, at every size? With a rule: does the collected model keep it?',
    example: 'audit commute M with G',
    subject: 'list',
    many: false,
    operands: [...operators, 'law'],
    sector: false,
    clauses: { with: 'need' },
    withKinds: ['law', 'symmetry', 'operator', 'rule', 'model'],
  },
  {
    ...none,
    name: 'laws',
    help: 'Do the laws commute with one another? How many are independent, with which relations and logical operators, at each size?',
    example: 'audit laws G, B on 2 x 2, 3 x 3',
    subject: 'list',
    many: true,
    operands: ['law', 'symmetry', 'operator'],
    sector: false,
    clauses: { on: 'may' },
  },
  {
    ...none,
    name: 'map',
    help: 'Does the map hold: commutation, product relations and their signs, sectors, isometry?',
    example: 'audit map N',
    subject: 'list',
    many: false,
    operands: ['map'],
    sector: false,
    clauses: { on: 'may' },
  },
  {
    ...none,
    name: 'spectrum',
    help: 'Do two models have the same lowest levels, each in its sector, on these sizes?',
    example: 'audit spectrum M [flip = +1] ~ H0 [flip = -1] on 2 x 2 levels 8',
    subject: 'list',
    many: false,
    operands: ['model'],
    sector: true,
    clauses: { '~': 'need', on: 'may', levels: 'may' },
  },
  {
    ...none,
    name: 'degeneracy',
    help: 'The ground energy of a model in a sector, how many states have it, and the gap above.',
    example: 'audit degeneracy M [flip = +1] on 2 x 2, 3 x 3',
    subject: 'list',
    many: false,
    operands: ['model'],
    sector: true,
    clauses: { on: 'may' },
  },
  {
    ...none,
    name: 'expect',
    help: 'The expectation value of an operator in the ground space of a model.',
    example: 'audit expect W in ground of M [flip = +1] on 3 x 3',
    subject: 'in ground of',
    many: false,
    operands: ['model'],
    sector: true,
    quantity: { words: [], kinds: [...operators, 'law'] },
    clauses: { on: 'may' },
  },
  {
    ...none,
    name: 'scan',
    help: 'A gap, an energy, an overlap or an operator as couplings vary.',
    example: 'audit scan gap of M [flip = +1] over h = 0 .. 2 by 0.1 on 2 x 3',
    subject: 'of',
    many: false,
    operands: ['model'],
    sector: true,
    quantity: { words: ['gap', 'energy', 'overlap'], kinds: [...operators, 'law'] },
    clauses: { over: 'need', on: 'may', with: 'may' },
    withKinds: ['reference', 'model'],
  },
  {
    ...none,
    name: 'symmetries',
    help: 'The local, subsystem and global Pauli symmetries of a model, found.',
    example: 'audit symmetries of M',
    subject: 'of',
    many: false,
    operands: ['model', 'operator'],
    sector: false,
    clauses: {},
  },
  {
    ...none,
    name: 'effective',
    help: 'Perturbation theory in the ground space of another model, with exact coefficients.',
    example: 'audit effective M from H0 order 4',
    subject: 'list',
    many: false,
    operands: ['model'],
    sector: false,
    clauses: { from: 'need', order: 'need' },
    withKinds: ['model'],
  },
  {
    ...none,
    name: 'count',
    help: 'How many basis states obey the rules, and the laws that are products of Z, exactly.',
    example: 'audit count one on 4 x 4, 8 x 8',
    subject: 'list',
    many: true,
    operands: ['rule', 'law', 'symmetry'],
    sector: false,
    clauses: { on: 'may' },
  },
];
