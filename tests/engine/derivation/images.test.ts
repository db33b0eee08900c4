import { describe, expect, it } from 'vitest';
import { reportSchema, type ReportImage } from '../../../shared/contracts/report.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';

/** The table of images that a report holds for each map. */

const bonds = (lattice: string): string => `lattice ${lattice}
spins s on vertices
spins g on links
symmetry flip = prod(v: vertices) s^x[v]
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]
operator field(v: vertices) = s^x[v]
operator far = s^z[vertices(0, 0)] s^z[vertices(2, 0)]
map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices
map back = inverse bonds
`;

function images(source: string, map: string): readonly ReportImage[] {
  const report = newDerivation().derive(source);
  expect(reportSchema.safeParse(report).success).toBe(true);
  expect(report.problems.filter((problem) => problem.severity === 'error')).toEqual([]);
  return (report.images ?? []).filter((row) => row.map === map);
}

const row = (rows: readonly ReportImage[], name: string): ReportImage => {
  const found = rows.find((one) => one.name === name);
  if (!found) throw new Error(`no row for ${name}`);
  return found;
};

describe.each(['square torus 4 x 4', 'triangular torus 4 x 4'])(
  'images of everything under bond variables, on the %s',
  (lattice) => {
    const source = bonds(lattice);

    it('says of a charged spin under what it is charged, and what string two of them end', () => {
      const charged = row(images(source, 'bonds'), 's^z');
      expect(charged).toMatchObject({ image: 'none', right: '', rightSupports: [] });
      expect(charged.symmetry).toContain('flip');
      const ends = charged.pair?.right.match(/g\^\{z\}/gu) ?? [];
      expect(ends).toHaveLength(3);
    });

    it('gives operators their images, and the symmetry that is used up its sign', () => {
      const rows = images(source, 'bonds');
      expect(row(rows, 'far').rightSupports[0]?.orbit).toHaveLength(2);
      expect(
        row(rows, 'field').rightSupports[0]?.orbit.every(({ species, pauli }) => species === 'g' && pauli === 'x'),
      ).toBe(true);
      expect(row(rows, 'flip')).toMatchObject({ image: 'constant', right: '1' });
    });

    it('turns the law of the other side into 1, and refuses its electric field', () => {
      const rows = images(source, 'back');
      expect(row(rows, 'flat')).toMatchObject({ what: 'law', image: 'constant', right: '1' });
      expect(row(rows, 'g^x').image).toBe('none');
      expect(row(rows, 'g^z').rightSupports[0]?.orbit.map(({ pauli }) => pauli)).toEqual(['z', 'z']);
    });
  },
);

describe('an operator that becomes a string without end', () => {
  it('has a product as its image, and is said to be no local operator there', () => {
    const rows = images(
      `lattice chain torus 6
spins s on vertices
spins m on vertices
operator end = s^z[vertices(0)]
map tail from s to m
  s^x[v]             => m^z[v]                    for v: vertices
  s^z[vertices(0)]   => prod(v: vertices) m^x[v]
`,
      'tail',
    );
    const end = row(rows, 'end');
    expect(end.image).toBe('product');
    expect(end.reason).toContain('unbounded support');
    expect(row(rows, 's^x').image).toBe('string');
  });
});

describe('images under the other kinds', () => {
  it('a state map names what leaves its states, and an image that a declared symmetry is bears its name', () => {
    const states = images(
      `lattice chain torus 4
spins p on vertices
spins q on vertices
spins a on vertices
symmetry parity = prod(v: vertices) a^z[v]
symmetry origin = prod(v: vertices) p^z[v]
map pack on v: vertices from p[v] q[v] to a[v]
  |01> => |0>
  |10> => |1>
map flip = circuit
  h p[v] for v: vertices
symmetry turned = prod(v: vertices) p^x[v]
`,
      'pack',
    );
    expect(row(states, 'p^x').notes.join(' ')).toContain('leave the allowed states');
    expect(row(states, 'p^z').image).toBe('string');
  });

  it('a circuit carries a symmetry to the declared one that it is', () => {
    const rows = images(
      `lattice chain torus 4
spins p on vertices
symmetry origin = prod(v: vertices) p^z[v]
symmetry turned = prod(v: vertices) p^x[v]
map turn = circuit
  h p[v] for v: vertices
`,
      'turn',
    );
    expect(row(rows, 'origin').right).toContain('turned');
    expect(row(rows, 'turned').right).toContain('origin');
  });
});
