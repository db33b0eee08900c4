/** The example that a visitor finds open. An ordinary notebook: nothing in the application knows it but this page. */
export const exampleTitle = 'The flip symmetry of a square magnet, gauged';

export const example: readonly { readonly id: string; readonly kind: 'prose' | 'statements'; readonly text: string }[] =
  [
    {
      id: 'magnet',
      kind: 'prose',
      text: [
        'On a square torus, spins $s$ sit on the vertices and couple along the links. Written in the variables of its bonds,',
        'the magnet becomes a $\\mathbb{Z}_2$ gauge theory: every bond $s^z_a s^z_b$ turns into one link variable, every field',
        '$s^x_v$ into the star around its vertex (F. Wegner, *J. Math. Phys.* **12**, 2259 (1971)).',
      ].join('\n'),
    },
    {
      id: 'lattice',
      kind: 'statements',
      text: ['lattice square torus 4 x 4', 'spins s on vertices', 'spins g on links', 'couplings J = 1, h = 0.6'].join(
        '\n',
      ),
    },
    {
      id: 'ising',
      kind: 'statements',
      text: ['model ising =', '  - J sum(l: links) s^z[l.a] s^z[l.b]', '  - h sum(v: vertices) s^x[v]'].join('\n'),
    },
    {
      id: 'laws',
      kind: 'statements',
      text: [
        'symmetry flip = prod(v: vertices) s^x[v]',
        'symmetry w1 = prod(l: loop(1)) g^z[l]',
        'symmetry w2 = prod(l: loop(2)) g^z[l]',
        'law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]',
      ].join('\n'),
    },
    {
      id: 'bonds',
      kind: 'statements',
      text: [
        'map bonds from s to g',
        '  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links',
        '  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices',
        '',
        'model gauge = bonds(ising)',
      ].join('\n'),
    },
    {
      id: 'holds',
      kind: 'statements',
      text: ['audit map bonds', 'audit commute gauge with flat'].join('\n'),
    },
    {
      id: 'spectra',
      kind: 'prose',
      text: 'Half of the magnet has no image: the two spectra agree only where the flip is even and no loop carries a holonomy.',
    },
    {
      id: 'levels',
      kind: 'statements',
      text: 'audit spectrum ising [flip = +1] ~ gauge [flat = +1, w1 = +1, w2 = +1] on 2 x 2, 3 x 3 levels 8',
    },
    {
      id: 'longitudinal',
      kind: 'prose',
      text: '## A longitudinal field\nA field along $z$ is odd under the flip. It has no place in the dual theory, and it breaks the symmetry at once.',
    },
    {
      id: 'biased',
      kind: 'statements',
      text: ['model biased = ising - 0.1 sum(v: vertices) s^z[v]', 'audit commute biased with flip'].join('\n'),
    },
  ];
