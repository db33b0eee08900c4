import { builtInRows } from '../lattice/built-in.ts';
import { geometryTable } from '../lattice/geometry.ts';
import { auditForms } from './forms.ts';

/** One thing of the language, for help, completion and hover. `example` is text of the language and is run in tests. */
export interface HelpRecord {
  readonly topic: 'statement' | 'lattice' | 'cells' | 'geometry' | 'operator' | 'expression' | 'map' | 'audit';
  readonly name: string;
  readonly help: string;
  /** Whole statements, or an expression where `topic` is geometry; names as in `referencePrelude`. */
  readonly example: string;
}

/** Declarations that the examples stand on. */
export const referencePrelude = `lattice square torus 4 x 4
spins s on vertices
spins g on links
spins m on plaquettes
couplings J = 1, h = 0.5
symmetry flip = prod(v: vertices) s^x[v]
law G(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l]
model M = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
model H0 = - J sum(l: links) s^z[l.a] s^z[l.b]
operator W = g^z[links.1(0, 0)]
rule one(v: vertices) = sum(l: star(v)) g^n[l] is 1
map N = gauge flip with g on links
map U = circuit
  h s[v] for v: vertices
`;

const record =
  (topic: HelpRecord['topic']) =>
  (name: string, help: string, example: string): HelpRecord => ({ topic, name, help, example });

const statement = record('statement');
const statements: readonly HelpRecord[] = [
  statement(
    'lattice',
    'The lattice, its boundary (torus, cylinder, open) and its size in unit cells. A source has one.',
    'lattice square torus 4 x 4',
  ),
  statement('spins', 'A species of spins on a kind or class of cells.', 'spins t on links.1'),
  statement(
    'couplings',
    'Couplings, with exact values or without; one without a value stays a symbol.',
    'couplings a = 2, b = sqrt(a) / 3, c',
  ),
  statement('model', 'A Hamiltonian. It must be Hermitian.', 'model K = - J sum(l: links) s^z[l.a] s^z[l.b]'),
  statement(
    'operator',
    'Any operator, with a parameter or without, for later use.',
    'operator A(v: vertices) = prod(l: star(v)) g^x[l]',
  ),
  statement(
    'law',
    'A Gauss law: one signed Pauli product at each cell, with its value.',
    'law C(p: plaquettes) = prod(l: rim(p)) g^z[l] is -1',
  ),
  statement(
    'symmetry',
    'A product of Pauli operators over a part of the lattice or all of it.',
    'symmetry wind = prod(l: loop(1)) g^z[l]',
  ),
  statement(
    'rule',
    'A diagonal rule at each cell: is a number, <= n, >= n, even or odd.',
    'rule few(v: vertices) = sum(l: star(v)) g^n[l] is <= 1',
  ),
  statement('reference', 'A state to compare with.', 'reference R = stabilizer state of G, B'),
  statement(
    'map',
    'From one language to another: a dictionary, gauging, a circuit, a solved law, a state map, or maps joined.',
    'map C = circuit\n  h g[l] for l: links',
  ),
  statement('audit', 'A question whose answer is a claim with its grade of evidence.', 'audit commute M with flip'),
];

const map = record('map');
const maps: readonly HelpRecord[] = [
  map(
    'from',
    'A dictionary: each line gives the image of a product; other terms are made of these.',
    'map D from s to g\n  s^z[l.a] s^z[l.b] => g^z[l] for l: links\n  s^x[v] => prod(l: star(v)) g^x[l] for v: vertices',
  ),
  map(
    'gauge',
    'Minimal coupling to an on-site Z2 symmetry; declares the law gauss.',
    'map D = gauge flip with g on links',
  ),
  map(
    'circuit',
    'Clifford gates, line after line: h s sdg x y z cx cy cz swap.',
    'map D = circuit\n  cz s[l.a] s[l.b] for l: links.1\n  h s[v] for v: vertices',
  ),
  map('solve', 'Uses up a law to remove a species: the unitary gauge.', 'map D = solve N.gauss for s'),
  map(
    'on',
    'A state map: images of the basis states of a block; states that are not listed are forbidden.',
    'map D on v: vertices from s[v] to m[plaquettes(v.x, v.y)]\n  |0> => |1>\n  |1> => |0>',
  ),
  map('then', 'One map after another; the left one acts first.', 'map D = U then inverse U'),
  map('inverse', 'The inverse of a map, where it exists.', 'map D = inverse U'),
];

const expression = record('expression');
const expressions: readonly HelpRecord[] = [
  expression(
    'sum',
    'A sum over cells; its body runs to the next + or - at its depth.',
    'operator O = sum(v: vertices where v.x % 2 == 0) s^z[v]',
  ),
  expression(
    'prod',
    'A product over cells; its body runs to the next + or - at its depth.',
    'operator O = prod(l: rim(plaquettes(0, 0))) g^z[l]',
  ),
  expression(
    'where',
    'Filters a sum or product: comparisons, in, not, and, or.',
    'operator O = sum(v: vertices where v.x == 0 or v.x == 1) s^z[v]',
  ),
  expression(
    'hc',
    '+ hc adds the Hermitian conjugate of all before it in its bracket or statement.',
    'operator O = sum(l: links) s^+[l.a] s^-[l.b] + hc',
  ),
  expression('sqrt', 'The square root of a rational number, exact.', 'operator O = sqrt(2) / 2 s^x[vertices(0, 0)]'),
  expression('1i', 'The imaginary unit.', 'operator O = 1i s^x[vertices(0, 0)] s^y[vertices(0, 0)]'),
  expression(
    'twist',
    'twist(M, P, d): the model M with the on-site symmetry P as a seam around direction d.',
    'model T = twist(M, flip, 1)',
  ),
  expression('%', 'The remainder, never negative.', 'operator O = sum(v: vertices where (v.x + v.y) % 2 == 1) s^x[v]'),
];

const operator = record('operator');
const operators: readonly HelpRecord[] = [
  operator('^x', 'The Pauli matrix X.', 'operator O = s^x[vertices(0, 0)]'),
  operator('^y', 'The Pauli matrix Y.', 'operator O = s^y[vertices(0, 0)]'),
  operator('^z', 'The Pauli matrix Z; |0> is Z = +1.', 'operator O = s^z[vertices(0, 0)]'),
  operator('^n', 'The projector onto |1>: (1 - Z)/2.', 'operator O = s^n[vertices(0, 0)]'),
  operator('^+', '(X + iY)/2 = |0><1|.', 'operator O = s^+[vertices(0, 0)]'),
  operator('^-', '(X - iY)/2 = |1><0|: it excites.', 'operator O = s^-[vertices(0, 0)]'),
];

const cells = record('cells');
const kinds: readonly HelpRecord[] = [
  cells(
    'vertices',
    'The vertices of the lattice; vertices.A one class of them, vertices(0, 0) one vertex.',
    'operator O = sum(v: vertices.A) s^x[v]',
  ),
  cells(
    'links',
    'The links; links.1 those along direction 1; l.a and l.b the ends of l.',
    'operator O = sum(l: links.1) s^z[l.a] s^z[l.b]',
  ),
  cells(
    'plaquettes',
    'The plaquettes; p.1, p.2, … the links of its rim in order.',
    'operator O = sum(p: plaquettes) g^z[p.1] g^z[p.3]',
  ),
  cells('cubes', 'The cubes of a lattice in three dimensions.', 'lattice cubic torus 2 x 2 x 2\nspins c on cubes'),
];

/** All help records, walked by the guide, by completion and by tests. */
export const reference: readonly HelpRecord[] = [
  ...statements,
  ...builtInRows.map((row) => record('lattice')(row.name, row.help, row.example)),
  ...kinds,
  ...geometryTable.map((f) => record('geometry')(f.name, f.help, f.example)),
  ...operators,
  ...expressions,
  ...maps,
  ...auditForms.map((f) => record('audit')(f.name, f.help, f.example)),
];

/** A whole source that shows a record at work: its example, with what the example stands on. */
export function exampleSource({ topic, example }: HelpRecord): string {
  if (example.startsWith('lattice')) return `${example}\n`;
  if (topic !== 'geometry') return `${referencePrelude}${example}\n`;
  const spatial = /faces|edges|membrane/u.test(example);
  const lattice = spatial ? 'cubic torus 2 x 2 x 2' : 'square torus 4 x 4';
  const plain = `lattice ${lattice}\nspins s on vertices\nspins g on links\nspins m on plaquettes\n`;
  if (/^(?:law|symmetry)/u.test(example)) return `${plain}${example}\n`;
  // the cell that the function is given: its letter says of which kind it is
  const given = /\((v|l|p|c)\)/u.exec(example)?.[1];
  const kind = { v: 'vertices', l: 'links', p: 'plaquettes', c: 'cubes' }[given ?? ''];
  return `${plain}operator O = ${kind === undefined ? '' : `sum(${given ?? ''}: ${kind}) `}${example}\n`;
}

/** The record of a word, of one topic or of any. */
export const helpOn = (name: string, topic?: HelpRecord['topic']): HelpRecord | undefined =>
  reference.find((r) => r.name === name && (topic === undefined || r.topic === topic));
