import { describe, expect, it } from 'vitest';
import { layoutOf } from '../../../shared/language/source.ts';
import { expression, linesOf, operatorLines, run, same, stringText } from './support.ts';

const square = 'lattice square torus 4 x 4\nspins s on vertices\nspins g on links\ncouplings J = 1, K\n';
const codes = (source: string): string[] => run(source).problems.map((p) => p.code);

describe('1 layout', () => {
  it('goes on over indented lines, blank lines and comments', () => {
    const text = `${square}model M = - J sum(l: links) s^z[l.a]   # ends\n\n# in column 1\n    s^z[l.b]\n\n  + sum(v: vertices) s^x[v]\nmodel N = 1\n`;
    const program = run(text);
    expect(program.problems).toEqual([]);
    expect(linesOf(program, 'M')).toEqual(['-J sz(0,0) sz(0,1) ~ 1,1', '-J sz(0,0) sz(1,0) ~ 1,1', '1 sx(0,0) ~ 1,1']);
  });
  it('takes each line of a body as a rule, deeper lines as its continuation', () => {
    const { statements } = layoutOf('map N from s to g\n    a\n      b\n   c\n\n    d # e\n');
    expect(statements[0]?.rules.length).toBe(3);
  });
  it('counts columns in characters and reads every kind of line end', () => {
    const program = run('lattice chain torus 4\r\nspins σ on vertices\r\nmodel H = sum(v: vertices) σ^x[v] + ζ\r\n');
    expect(program.problems.map((p) => [p.line, p.column, p.length, p.code])).toEqual([[3, 37, 1, 'unknown-name']]);
  });
  it('says so when an indented line opens a source', () => {
    expect(run('  model A = 1\n').problems[0]).toMatchObject({ code: 'indent', line: 1, column: 3 });
  });
});

describe('2 names', () => {
  it('lets every word but the reserved ones be a name', () => {
    const text =
      'lattice chain torus 4\nspins s on vertices\nspins torus on links\ncouplings x = 1, levels = 2\nmodel left = levels sum(v: vertices) s^z[v]\nmodel chain = left\nmodel gauge = x chain\nlaw star(v: vertices) = prod(l: star(v)) torus^x[l]\nmodel model = sum(v: vertices) star(v)\nmap map = circuit\n  s s[v] for v: vertices\naudit commute gauge with star\naudit spectrum left ~ chain on 4 levels 3\n';
    const program = run(text);
    expect(program.problems).toEqual([]);
    expect(program.audits.length).toBe(2);
    expect(program.values.find('model')?.what).toBe('model');
  });
  it('takes σ, \\sigma and sigma as one name, and pasted forms', () => {
    const prelude = 'lattice square torus 4 x 4\nspins σ on links\n';
    expect(same('\\sigma^{z}[links.1(0,0)] · 2 × 3 − 1', 'sigma^z[links.1(0,0)] * 2 * 3 - 1', prelude)).toBe(true);
    expect(codes(`${prelude}spins sigma on vertices\n`)).toEqual(['declared-twice']);
  });
});

describe('3 products', () => {
  it.each([
    ['1/2 J', 'J/2'],
    ['1/2 J K', '(J K)/2'],
    ['6/2/3', '1'],
    ['2 J (1 + 1)', '4 J'],
    ['1/J (2)', '2/J'],
    ['J (1 + 1)^2', '4 J'],
    ['-2^2', '-4'],
    ['2 * -3', '-6'],
    ['7 % 4 % 2', '1'],
    ['-1 % 4', '3'],
    ['J^-1 J', '1'],
    ['s^x[vertices(0,0)]^2', '1'],
    ['(s^x[vertices(0,0)] + s^z[vertices(0,0)])^2', '2'],
    ['s^x[vertices(0,0)] s^y[vertices(0,0)]', '1i s^z[vertices(0,0)]'],
    ['s^-[vertices(0,0)] s^+[vertices(0,0)]', 's^n[vertices(0,0)]'],
    ['s^n[vertices(0,0)]', '(1 - s^z[vertices(0,0)]) / 2'],
  ])('%s is %s', (a, b) => {
    expect(same(a, b)).toBe(true);
  });
});

describe('4 numbers', () => {
  it('are exact', () => {
    expect(expression('0.6 - 3/5').lines).toEqual([]);
    expect(same('1e-3', '1/1000')).toBe(true);
    expect(same('sqrt(2) sqrt(8)', '4')).toBe(true);
    expect(same('1i 1i', '-1')).toBe(true);
  });
  it('give couplings values that may use earlier ones', () => {
    const program = run('couplings a = 2, b = sqrt(a) / 2, c\ncouplings d = a b\n');
    expect(program.problems).toEqual([]);
    const value = program.values.find('d');
    expect(value?.what === 'coupling' && value.value?.toText()).toBe('sqrt(2)');
  });
  it('separate sizes with x, with or without spaces', () => {
    const sizes = run(`${square}law G(v: vertices) = s^x[v]\naudit laws G on 2x3, 2 x 3, 2×3\n`).audits[0]?.sizes;
    expect(sizes?.map((s) => JSON.stringify(s.periods))).toEqual(Array(3).fill('[[2,0],[0,3]]'));
  });
});

describe('5 sums and products over cells', () => {
  it('end at the next sign', () => {
    expect(same('sum(v: vertices) 2 s^x[v] - 1', '(sum(v: vertices) 2 s^x[v]) - 1')).toBe(true);
  });
  it('decide periods on the enlarged cell', () => {
    expect(expression('sum(v: vertices) (-1)^(v.x + v.y) s^z[v]').lines).toEqual([
      '-1 sz(0,1) ~ 2,2',
      '-1 sz(1,0) ~ 2,2',
      '1 sz(0,0) ~ 2,2',
      '1 sz(1,1) ~ 2,2',
    ]);
    expect(
      same(
        'sum(v: vertices where v.x % 2 == 0) s^z[v] + sum(v: vertices where not v.x % 2 == 0) s^z[v]',
        'sum(v: vertices) s^z[v]',
      ),
    ).toBe(true);
    expect(expression('sum(v: vertices where v.x % 3 == 0) s^z[v]').codes).toEqual(['period-size']);
  });
  it('pin coordinates, relate bound cells, and write out what never repeats', () => {
    expect(expression('sum(v: vertices where v.y == 1) s^z[v]').lines).toEqual(['1 sz(0,1) ~ 1,0']);
    expect(expression('sum(u: vertices, v: vertices where v.x == u.x + 1 and u.y == v.y) s^z[u] s^z[v]').lines).toEqual(
      ['1 sz(0,0) sz(1,0) ~ 1,1'],
    );
    expect(
      same(
        'sum(u: vertices, v: vertices where v in neighbours(u)) s^z[u] s^z[v] / 2',
        'sum(l: links) s^z[l.a] s^z[l.b]',
      ),
    ).toBe(true);
    const bounded = expression('sum(v: vertices where v.x < 2 and v.y == 0) s^z[v]');
    expect(bounded.lines).toEqual(['1 sz(0,0) ~ 0,0', '1 sz(1,0) ~ 0,0']);
    expect(bounded.codes).toEqual(['declared-size']);
  });
  it('take the cases of an or one by one, each cell once', () => {
    expect(expression('sum(v: vertices where v.y == 0 or v.y == 2) s^z[v]').lines).toEqual([
      '1 sz(0,0) ~ 1,0',
      '1 sz(0,2) ~ 1,0',
    ]);
    expect(
      same(
        'sum(v: vertices where v.x % 2 == 0 or v.y % 2 == 0) s^z[v]',
        'sum(v: vertices) s^z[v] - sum(v: vertices where v.x % 2 == 1 and v.y % 2 == 1) s^z[v]',
      ),
    ).toBe(true);
  });
  it('know in, not and classes', () => {
    expect(
      same(
        'sum(v: vertices) prod(l: star(v) where not l in links.2) g^x[l]',
        'sum(v: vertices) g^x[links.1(v.x, v.y)] g^x[links.1(v.x, v.y) - (1, 0)]',
      ),
    ).toBe(true);
  });
  it('caution a factor that does not use the variable, and what + hc doubles', () => {
    expect(codes(`${square}law G(v: vertices) = prod(l: star(v)) s^x[v] g^x[l]\n`)).toEqual(['constant-factor']);
    const doubled = run(`${square}model H = sum(l: links) s^+[l.a] s^-[l.b] + J sum(v: vertices) s^z[v] + hc\n`);
    expect(doubled.problems.map((p) => [p.code, p.column, p.severity])).toEqual([['hc-doubles', 45, 'caution']]);
    expect(codes(`${square}model H = sum(l: links) (s^+[l.a] s^-[l.b] + s^z[l.a]) + hc\n`)).toEqual(['hc-doubles']);
  });
  it('close their bracket with + hc', () => {
    expect(
      same('sum(l: links) (s^+[l.a] s^-[l.b] + hc)', 'sum(l: links) (s^x[l.a] s^x[l.b] + s^y[l.a] s^y[l.b]) / 2'),
    ).toBe(true);
  });
});

describe('6 cells', () => {
  it('are shifted and named', () => {
    expect(same('s^x[vertices(1, 0) + (1, -1)]', 's^x[vertices.A(2, -1)]')).toBe(true);
    expect(same('sum(v: vertices) s^x[v - (1, 0)]', 'sum(v: vertices) s^x[v]')).toBe(true);
  });
  it('stand at the origin where a parameter is left out', () => {
    const program = run(
      `${square}operator A(v: vertices) = prod(l: star(v)) g^x[l]\nmodel M = sum(v: vertices) A(v)\naudit expect A in ground of M\n`,
    );
    expect(program.problems).toEqual([]);
    expect(linesOf(program, 'A')).toEqual(['1 gx(-1,0) gx(0,0) gx.1(0,-1) gx.1(0,0) ~ 0,0']);
    expect(program.audits[0]).toMatchObject({ quantity: 'A', subjects: [{ name: 'M' }] });
  });
});

describe('7 small and open lattices', () => {
  it('are the infinite form, whatever the size', () => {
    const on = (size: string): string[] =>
      expression('sum(l: links) s^z[l.a] s^z[l.b]', `lattice square torus ${size}\nspins s on vertices\n`).lines;
    expect(on('1 x 1')).toEqual(on('4 x 5'));
  });
  it('mark what an open edge cuts and what must exist', () => {
    const program = run(
      'lattice square open 3 x 3\nspins s on vertices\nspins g on links\nlaw G(v: vertices) = s^x[v] prod(l: star(v)) g^x[l]\n',
    );
    const law = program.values.find('G');
    const [family] = law?.what === 'law' ? law.families : [];
    expect(family && stringText(family.string)).toBe('gx(-1,0)? gx(0,0)? gx.1(0,-1)? gx.1(0,0)? sx(0,0)');
    expect(family?.needs).toContainEqual({ kind: 'vertices', index: 0, offset: [0, 0] });
  });
  it('drop terms of a sum over a cut set, cell by cell', () => {
    const program = run(
      'lattice chain open 3\nspins s on vertices\nrule r(v: vertices) = sum(u: neighbours(v)) s^n[u] is <= 1\n',
    );
    const rule = program.values.find('r');
    const operator = rule?.what === 'rule' ? rule.families[0]?.operator : undefined;
    expect(operator && operatorLines(operator).length).toBe(4);
    expect(operator?.families.filter((f) => f.string.factors.length === 0).map((f) => f.needs.length)).toEqual([1, 1]);
  });
});

describe('8 heads', () => {
  it('take values', () => {
    const program = run(
      `${square}law G(v: vertices) = s^x[v] is -1\nrule a(v: vertices) = s^n[v] is odd\nrule b(v: vertices) = s^n[v] is >= 1/2\n`,
    );
    expect(program.problems).toEqual([]);
    expect(program.values.find('G')).toMatchObject({ value: -1 });
    expect(program.values.find('a')).toMatchObject({ relation: 'odd' });
    expect(program.values.find('b')).toMatchObject({ relation: '>=' });
  });
  it('label sectors with declared values or others', () => {
    const program = run(
      `${square}law G(v: vertices) = s^x[v]\nmodel M = sum(v: vertices) s^x[v]\naudit degeneracy M [G, G = -1] on 2 x 2\n`,
    );
    expect(program.audits[0]?.subjects[0]?.sector.map((l) => l.value)).toEqual([undefined, -1]);
  });
});

describe('10 maps', () => {
  it('read all their forms', () => {
    const program = run(
      `${square}symmetry P = prod(v: vertices) s^x[v]\nmap A = gauge P with g on links\nmap B = solve A.gauss for s\nmap C = A then B\nmap D = circuit\n  h s[v] for v: vertices\n  cz s[l.a] s[l.b] for l: links.1\nmap E = inverse D\nmap F = D then inverse D\n`,
    );
    expect(program.problems).toEqual([]);
    const kinds = ['A', 'B', 'C', 'D', 'E', 'F'].map((name) => {
      const value = program.values.find(name);
      return value?.what === 'map' ? value.declaration.kind : undefined;
    });
    expect(kinds).toEqual(['gauge', 'solve', 'then', 'circuit', 'inverse', 'then']);
  });
  it('take a line without for as one global generator', () => {
    const program = run(
      'lattice chain torus 4\nspins s on vertices\nspins m on links\nmap N from s to m\n  s^z[l.a] s^z[l.b] => m^x[l] for l: links\n  prod(v: vertices) s^x[v] => prod(l: links) m^z[l]\n',
    );
    expect(program.problems).toEqual([]);
    const value = program.values.find('N');
    const rules = value?.what === 'map' && value.declaration.kind === 'dictionary' ? value.declaration.rules : [];
    expect(rules.map((r) => r.anchor === undefined)).toEqual([false, true]);
    expect(rules[1] && 'parts' in rules[1].left).toBe(true);
  });
  it('give amplitudes exactly', () => {
    const program = run(
      'lattice chain torus 4\nspins p on vertices\nspins a on vertices\nspins b on vertices\nmap N on v: vertices from p[v] to a[v] b[v]\n  |0> => (|01⟩ - 1i |10>) / sqrt(2)\n',
    );
    expect(program.problems).toEqual([]);
    const value = program.values.find('N');
    const rules = value?.what === 'map' && value.declaration.kind === 'states' ? value.declaration.rules : [];
    expect([...(rules[0]?.amplitudes ?? [])].map(([bits, c]) => `${bits} ${c.toText()}`)).toEqual([
      '01 sqrt(2)/2',
      '10 -1/2*1i*sqrt(2)',
    ]);
  });
});

describe('11 audits', () => {
  it('include the end of a range when it falls on the grid', () => {
    const program = run(
      `${square}model M = J sum(v: vertices) s^x[v]\naudit scan gap of M over J = 0 .. 1 by 0.25, K = 1/2 on 2 x 2\naudit scan energy of M over J = 0 .. 1 by 0.3\n`,
    );
    expect(program.problems).toEqual([]);
    expect(program.audits.map((a) => a.over.map((r) => r.points.map((c) => c.toText())))).toEqual([
      [['0', '1/4', '1/2', '3/4', '1'], ['1/2']],
      [['0', '3/10', '3/5', '9/10']],
    ]);
  });
  it('take sizes by their periods', () => {
    const program = run(`${square}law G(v: vertices) = s^x[v]\naudit laws G on 2 x 2, (2, 2), (1, -2), 3 x 3\n`);
    expect(program.audits[0]?.sizes.map((s) => s.periods)).toEqual([
      [
        [2, 0],
        [0, 2],
      ],
      [
        [2, 2],
        [1, -2],
      ],
      [
        [3, 0],
        [0, 3],
      ],
    ]);
  });
});
