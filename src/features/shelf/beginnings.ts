/** A first text for what somebody wants to do; a notebook as `.gw` text that runs as it stands and is there to be changed. */
export interface Beginning {
  readonly want: string;
  readonly source: string;
}

export const beginnings: readonly Beginning[] = [
  {
    want: 'gauge a symmetry',
    source: `#@ title Gauging a symmetry

#: Put your own model here, and the on-site symmetry that is to become local. The spins \`g\` will carry the gauge field.

lattice square torus 2 x 3
spins s on vertices
spins g on links
couplings J = 1, h = 0.7, K = 0.5

model matter =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]

#: Minimal coupling; the Gauss law comes with the map. Add the energy of the gauge field yourself.

map minimal = gauge flip with g on links
model gauged = minimal(matter)
  - K sum(p: plaquettes) prod(l: rim(p)) g^z[l]
audit commute gauged with minimal.gauss

#: In unitary gauge the law is used up and the matter is gone.

map unitary = solve minimal.gauss for s
model slim = unitary(gauged)
audit spectrum gauged [minimal.gauss = +1] ~ slim on 2 x 2, 2 x 3 levels 6
`,
  },
  {
    want: 'check Gauss laws',
    source: `#@ title Do my terms obey my laws?

#: State the laws first: one product at each cell, with its value.

lattice square torus 3 x 3
spins g on links
couplings K = 1, e = 0.4

law gauss(v: vertices) = prod(l: star(v)) g^x[l]
audit laws gauss on 2 x 2, 3 x 3

#: Then the model, term by term. Change a term: where one fails, the pair and the spins where it meets are named.

model theory =
  - K sum(p: plaquettes) prod(l: rim(p)) g^z[l]
  - e sum(l: links) g^x[l]
audit commute theory with gauss
`,
  },
  {
    want: 'try a dictionary',
    source: `#@ title A dictionary on trial

#: On the left the products that you know, on the right what you think they become.

lattice chain torus 8
spins s on vertices
spins m on links
couplings J = 1, h = 0.6

model left =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]

map guess from s to m
  s^z[l.a] s^z[l.b] => m^x[l]                   for l: links
  s^x[v]            => prod(l: star(v)) m^z[l]  for v: vertices
model right = guess(left)
audit map guess

#: The audit names the sectors in which the map holds. Compare spectra in these.

symmetry flip = prod(v: vertices) s^x[v]
symmetry walls = prod(l: links) m^x[l]
audit spectrum left [flip = +1] ~ right [walls = +1] on 6, 8 levels 6
`,
  },
  {
    want: 'map blocks of states',
    source: `#@ title Blocks with forbidden states

#: Which states of a block are allowed, and what each becomes. A state that is not listed is forbidden.

lattice chain torus 4
spins p on vertices
spins q on vertices
spins a on vertices
spins b on vertices
couplings w = 1, d = 0.4

map pack on v: vertices from p[v] q[v] to a[v] b[v]
  |00> => |00>
  |10> => (|01> + |10>) / sqrt(2)
  |01> => (|01> - |10>) / sqrt(2)
audit map pack

#: Terms that lead out of the allowed states are projected, with a caution. The same constraint as a rule names the sector on the left.

model left =
  - w sum(v: vertices) (p^x[v] + q^x[v])
  + d sum(v: vertices) p^n[v] q^n[v + (1)]
model right = pack(left)
rule one(v: vertices) = p^n[v] + q^n[v] is <= 1
audit spectrum left [one] ~ right [pack] on 3, 4 levels 6
`,
  },
  {
    want: 'find the laws of a model',
    source: `#@ title Which laws does it have?

#: State a model of which you suspect that it conserves more than its energy.

lattice honeycomb torus 3 x 3
spins s on vertices
couplings Jx = 1, Jy = 1, Jz = 1

model compass =
  - Jx sum(l: links.1) s^x[l.a] s^x[l.b]
  - Jy sum(l: links.2) s^y[l.a] s^y[l.b]
  - Jz sum(l: links.3) s^z[l.a] s^z[l.b]

#: The claim lists local laws, subsystem and global symmetries. Point at one and the plate draws it.

audit symmetries of compass
`,
  },
];
