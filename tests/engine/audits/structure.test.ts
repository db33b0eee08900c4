import { describe, expect, it } from 'vitest';
import type { Finding } from '../../../shared/audits/audit.ts';
import { structure } from '../../../shared/audits/structure.ts';
import { plainKernel } from '../../../shared/spectra/kernel/plain.ts';
import type { Family } from '../../../shared/algebra/pauli/types.ts';
import type { Lattice } from '../../../shared/lattice/cells.ts';
import type { Value } from '../../../shared/language/values.ts';
import { family, lattice, model, operator, spins, statement, subject, values } from './values.ts';

function ask(on: Lattice, species: readonly Value[], families: readonly Family[]): readonly Finding[] {
  const all = values(on, ...species, model('m', operator(...families)));
  const [question] = structure.questions(statement('symmetries', { subjects: [subject('m')] }), all);
  if (!question) throw new Error('no question');
  const run = structure.decide(question, { kernel: plainKernel, limit: { operations: 1e12, bytes: 1e10 } });
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
  }
}

const square = lattice('square', 'torus', 4, 4);
const s = spins('s', 'vertices', [0]);
const g = spins('g', 'links', [0, 1]);
const star = family(1, 'gx:l0(0,0) gx:l0(-1,0) gx:l1(0,0) gx:l1(0,-1)', [1, 1]);
const plaquette = family(1, 'gz:l0(0,0) gz:l1(1,0) gz:l0(0,1) gz:l1(0,0)', [1, 1]);

const cubic = lattice('cubic', 'torus', 3, 3, 3);
const cubicStar = family(
  1,
  'gx:l0(0,0,0) gx:l0(-1,0,0) gx:l1(0,0,0) gx:l1(0,-1,0) gx:l2(0,0,0) gx:l2(0,0,-1)',
  [1, 1, 1],
);
const cubicPlaquettes = [
  family(1, 'gz:l0(0,0,0) gz:l1(1,0,0) gz:l0(0,1,0) gz:l1(0,0,0)', [1, 1, 1]),
  family(1, 'gz:l0(0,0,0) gz:l2(1,0,0) gz:l0(0,0,1) gz:l2(0,0,0)', [1, 1, 1]),
  family(1, 'gz:l1(0,0,0) gz:l2(0,1,0) gz:l1(0,0,1) gz:l2(0,0,0)', [1, 1, 1]),
];
/** The X-cube model: all edges of a cube, and crosses of four links at a vertex (S. Vijay, J. Haah, L. Fu 2016). */
const edges = [0, 1, 2].flatMap((d) =>
  [0, 1].flatMap((i) =>
    [0, 1].map((j) => {
      const offset = d === 0 ? [0, i, j] : d === 1 ? [i, 0, j] : [i, j, 0];
      return `gx:l${String(d)}(${offset.join(',')})`;
    }),
  ),
);
const cube = family(1, edges.join(' '), [1, 1, 1]);
const crosses = [
  family(1, 'gz:l0(0,0,0) gz:l0(-1,0,0) gz:l1(0,0,0) gz:l1(0,-1,0)', [1, 1, 1]),
  family(1, 'gz:l0(0,0,0) gz:l0(-1,0,0) gz:l2(0,0,0) gz:l2(0,0,-1)', [1, 1, 1]),
  family(1, 'gz:l1(0,0,0) gz:l1(0,-1,0) gz:l2(0,0,0) gz:l2(0,0,-1)', [1, 1, 1]),
];

describe('symmetries found', () => {
  it.each<[string, Lattice, Value[], Family[], object]>([
    ['toric code', square, [g], [star, plaquette], { local: 2, subsystem: 0, global: 4 }],
    [
      'Ising on the square lattice',
      square,
      [s],
      [
        family(1, 'sz:v0(0,0) sz:v0(1,0)', [1, 1]),
        family(1, 'sz:v0(0,0) sz:v0(0,1)', [1, 1]),
        family(1, 'sx:v0(0,0)', [1, 1]),
      ],
      { local: 0, subsystem: 0, global: 1 },
    ],
    [
      'plaquette Ising',
      square,
      [s],
      [family(1, 'sz:v0(0,0) sz:v0(1,0) sz:v0(0,1) sz:v0(1,1)', [1, 1]), family(1, 'sx:v0(0,0)', [1, 1])],
      { local: 0, subsystem: 2, global: 0 },
    ],
    [
      'gauge field with matter',
      square,
      [s, g],
      [
        family(1, 'sz:v0(0,0) gz:l0(0,0) sz:v0(1,0)', [1, 1]),
        family(1, 'sz:v0(0,0) gz:l1(0,0) sz:v0(0,1)', [1, 1]),
        family(1, 'sx:v0(0,0)', [1, 1]),
        plaquette,
        family(1, 'gx:l0(0,0)', [1, 1]),
        family(1, 'gx:l1(0,0)', [1, 1]),
      ],
      { local: 1, subsystem: 0, global: 0 },
    ],
    [
      'chain with three-spin terms and a field',
      lattice('chain', 'torus', 6),
      [s],
      [family(1, 'sz:v0(0) sx:v0(1) sz:v0(2)', [1]), family(1, 'sx:v0(0)', [1])],
      { local: 0, subsystem: 0, global: 2 },
    ],
    [
      'compass model on the honeycomb lattice',
      lattice('honeycomb', 'torus', 3, 3),
      [spins('s', 'vertices', [0, 1])],
      [
        family(1, 'sx:v0(1,0) sx:v1(0,0)', [1, 1]),
        family(1, 'sy:v0(0,1) sy:v1(0,0)', [1, 1]),
        family(1, 'sz:v0(0,0) sz:v1(0,0)', [1, 1]),
      ],
      { local: 1, subsystem: 0, global: 2 },
    ],
    [
      'toric code in three dimensions',
      cubic,
      [spins('g', 'links', [0, 1, 2])],
      [cubicStar, ...cubicPlaquettes],
      { local: 4, subsystem: 0, global: 6 },
    ],
    [
      'plaquette Ising in three dimensions',
      cubic,
      [s],
      [
        family(1, 'sz:v0(0,0,0) sz:v0(1,0,0) sz:v0(0,1,0) sz:v0(1,1,0)', [1, 1, 1]),
        family(1, 'sz:v0(0,0,0) sz:v0(1,0,0) sz:v0(0,0,1) sz:v0(1,0,1)', [1, 1, 1]),
        family(1, 'sz:v0(0,0,0) sz:v0(0,0,1) sz:v0(0,1,0) sz:v0(0,1,1)', [1, 1, 1]),
        family(1, 'sx:v0(0,0,0)', [1, 1, 1]),
      ],
      { local: 0, subsystem: 3, global: 0 },
    ],
    ['X-cube', cubic, [spins('g', 'links', [0, 1, 2])], [cube, ...crosses], { local: 3, subsystem: 9, global: 0 }],
    [
      'Ising field on every other row',
      square,
      [s],
      [
        family(1, 'sz:v0(0,0) sz:v0(1,0)', [1, 1]),
        family(1, 'sz:v0(0,0) sz:v0(0,1)', [1, 1]),
        family(1, 'sx:v0(0,0)', [2, 1]),
      ],
      { local: 1, subsystem: 0, global: 1 },
    ],
  ])('%s', (_, on, species, families, figures) => {
    const found = ask(on, species, families);
    expect(found[0]?.evidence.kind).toBe('exact on');
    expect(found[0]?.figures).toMatchObject(figures);
    expect(found[1]?.evidence.kind).toBe('all sizes');
  });

  it('writes them as declarations, with those that do not commute', () => {
    const [first] = ask(square, [g], [star, plaquette]);
    expect(first?.figures['found']).toEqual([
      'law found1(v: vertices) = prod(k: star(v)) g^x[k]',
      'law found2(p: plaquettes) = prod(k: rim(p)) g^z[k]',
      'symmetry found3 = prod(l: links.1 where l.y == 0) g^z[l]',
      'symmetry found4 = prod(l: links.2 where l.y == 0) g^x[l]',
      'symmetry found5 = prod(l: links.2 where l.x == 0) g^z[l]',
      'symmetry found6 = prod(l: links.1 where l.x == 0) g^x[l]',
    ]);
    // each loop against the one of the other kind that it crosses
    expect(first?.figures['clashes']).toEqual([
      [2, 5],
      [3, 4],
    ]);
  });

  it('leaves fractal symmetries open, with what they add on each size', () => {
    // three-spin terms on triangles: strings that commute with all are fractals (M. Newman, C. Moore, Phys. Rev. E 60, 5068 (1999))
    const [first] = ask(
      square,
      [s],
      [family(1, 'sz:v0(0,0) sz:v0(1,0) sz:v0(0,1)', [1, 1]), family(1, 'sx:v0(0,0)', [1, 1])],
    );
    expect(first?.evidence.kind).toBe('reason');
    expect(JSON.stringify(first?.evidence)).toContain('7 x 7');
  });

  it('refuses what stands in one place', () => {
    const [first] = ask(square, [s], [family(1, 'sz:v0(0,0)', [0, 0])]);
    expect(first?.evidence).toMatchObject({ kind: 'reason' });
  });
});
