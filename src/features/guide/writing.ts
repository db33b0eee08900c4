import type { Chapter } from './chapter.ts';

const ising = `lattice square torus 3 x 3
spins s on vertices
spins g on links
couplings J = 1, h = 0.6
model ising =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]
`;

const bonds = `map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices
`;

/** How a derivation is written, step by step. */
export const writing: readonly Chapter[] = [
  {
    name: 'model',
    title: 'State a model',
    about: 'lattice, spins, couplings, Hamiltonian',
    sections: [
      {
        heading: 'Lattice and spins',
        prose: `A notebook has one lattice: a family (chain, square, triangular, honeycomb, kagome, cubic, or one of your own), a boundary and a size in unit cells. The size is that of the drawing and of what is computed on a cluster; what is decided for every size does not look at it.

Spins sit on a kind of cell, and a letter of your choice names them: \`s\` on vertices for the magnet, \`g\` on links for the gauge field.`,
        example: `lattice honeycomb torus 3 x 3\nspins s on vertices\nspins g on links\nspins m on plaquettes\n`,
      },
      {
        heading: 'The Hamiltonian',
        prose: `A model is a sum of Pauli strings: \`sum\` runs over cells, \`prod\` multiplies over the cells around one. The ends of a link \`l\` are \`l.a\` and \`l.b\`; a shift in unit cells is written \`v + (1, 0)\`.

The letters are Pauli matrices, with eigenvalues $\\pm 1$: for spins one half in units of $\\hbar$, put the factors $\\tfrac12$ and $\\tfrac14$ into the couplings. Signs are yours to write: $-J$ is ferromagnetic for $J > 0$.

A coupling without a value stays a symbol. It is good for everything but numbers: commutation, maps and effective terms keep it as it is.`,
        example: `lattice square torus 4 x 4
spins s on vertices
couplings J = 1, K, h = 0.6
model field = - h sum(v: vertices) s^x[v]
model whole = field
  - J sum(l: links) s^z[l.a] s^z[l.b]
  + K sum(v: vertices where (v.x + v.y) % 2 == 0) s^z[v + (1, 0)] s^z[v + (-1, 0)]
`,
      },
      {
        heading: 'What is refused',
        prose: `A model must be Hermitian; where it is not, the part that is not is named. \`+ hc\` adds the conjugate of all before it in its bracket. Names are declared before they are used, and once.`,
        example: `lattice chain torus 6
spins s on vertices
couplings t = 1
model hopping = - t sum(l: links) (s^+[l.a] s^-[l.b] + hc)
`,
      },
    ],
  },
  {
    name: 'laws',
    title: 'Say what it obeys',
    about: 'Gauss laws, symmetries, rules',
    sections: [
      {
        heading: 'Laws and symmetries',
        prose: `A **law** is one signed Pauli product at each cell, with the value that states are to have: $+1$, or $-1$ for a background charge at every cell. A **symmetry** is one product over all of the lattice, or over a loop of it. Both become labels of sectors. A charge at every cell needs an even number of cells: on an odd torus the law of the example has no state, and its audit says so.`,
        example: `${ising}law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]
law odd(v: vertices) = prod(l: star(v)) g^x[l] is -1
symmetry w1 = prod(l: loop(1)) g^z[l]
audit laws odd on 2 x 2, 4 x 4
`,
      },
      {
        heading: 'Not all laws are independent',
        prose: `On a closed surface every link of the stars is counted twice, so the product of all stars is one. Without matter that is a relation among the laws; with matter it says that an odd total is excluded. \`audit laws\` counts the independent ones on each size, gives the relations with their signs, and says whether any state is left: laws that multiply to $-1$ have none.`,
        example: `lattice square torus 3 x 3
spins g on links
law A(v: vertices) = prod(l: star(v)) g^x[l]
law B(p: plaquettes) = prod(l: rim(p)) g^z[l]
audit laws A, B on 2 x 2, 3 x 3
`,
      },
      {
        heading: 'Rules',
        prose: `Where the constraint is no Pauli product, a **rule** says how many spins around a cell are excited: one dimer at a vertex, at most one excitation on a bond. \`audit count\` counts the states that obey it without listing them.`,
        example: `lattice chain torus 10
spins r on vertices
rule apart(l: links) = r^n[l.a] + r^n[l.b] is <= 1
audit count apart on 6, 10, 30
`,
      },
      {
        heading: 'Let them be found',
        prose: `If you do not know the laws, ask: \`audit symmetries\` lists the local laws, the subsystem and the global Pauli symmetries of a model, and says in which sense the list is complete.`,
        example: `lattice square torus 3 x 3
spins s on vertices
couplings K = 1, h = 1
model plaquette =
  - K sum(p: plaquettes) prod(v: corners(p)) s^z[v]
  - h sum(v: vertices) s^x[v]
audit symmetries of plaquette
`,
      },
    ],
  },
  {
    name: 'maps',
    title: 'Choose a map',
    about: 'dictionary, gauging, circuit, unitary gauge, state map',
    sections: [
      {
        heading: 'A dictionary',
        prose: `Each line gives the image of one product. Any other term is taken apart into products of the left sides; a term that is none is an error, and names a symmetry under which the term is charged and the dictionary is not.`,
        example: `${ising}${bonds}model gauge = bonds(ising)\naudit map bonds\n`,
      },
      {
        heading: 'Gauging a symmetry',
        prose: `Where no dictionary is known, gauge the symmetry: each bond gets a gauge field, and the Gauss law comes with the map under the name \`gauss\`. Terms for the gauge field itself, flux and electric energy, are yours to add.`,
        example: `${ising}map minimal = gauge flip with g on links
model higgs = minimal(ising) - 0.5 sum(p: plaquettes) prod(l: rim(p)) g^z[l]
audit commute higgs with minimal.gauss
`,
      },
      {
        heading: 'Unitary gauge',
        prose: `A law that holds a spin of its own at each cell can be used up to remove that spin. No constraint remains, so the two spectra can be compared without naming a sector on the right.`,
        example: `${ising}map minimal = gauge flip with g on links
map unitary = solve minimal.gauss for s
model slim = unitary(minimal(ising))
audit map unitary
`,
      },
      {
        heading: 'A circuit',
        prose: `Clifford gates, line after line, the first line first: the image of $O$ is $U O U^\\dagger$. A circuit of few layers is no duality but a change of variables; it keeps the whole spectrum.`,
        example: `lattice chain torus 8
spins s on vertices
model cluster = - sum(v: vertices) s^z[v + (-1)] s^x[v] s^z[v + (1)]
map undo = circuit
  cz s[v] s[v + (1)] for v: vertices
model plain = undo(cluster)
audit map undo
`,
      },
      {
        heading: 'A state map',
        prose: `Blocks of spins to blocks of spins, state by state. States that are not listed are forbidden: operators are projected onto those that are, and what would have led out is a caution. So a state map is one-to-one only within the allowed states, and where terms lead out of them it is no homomorphism: multiply first, map then.`,
        example: `lattice chain torus 4
spins p on vertices
spins q on vertices
spins a on vertices
spins b on vertices
map pair on v: vertices from p[v] q[v] to a[v] b[v]
  |00> => |00>
  |01> => (|01> + |10>) / sqrt(2)
  |11> => |11>
audit map pair
`,
      },
      {
        heading: 'Joined and inverted',
        prose: `\`A then B\` applies A first. \`inverse A\` exists where the map is one-to-one; where it is not, you are told which products have no preimage.`,
        example: `lattice chain torus 8
spins s on vertices
map first = circuit
  h s[v] for v: vertices
map second = circuit
  cz s[v] s[v + (1)] for v: vertices
map both = first then second
map back = inverse both
audit map back
`,
      },
    ],
  },
  {
    name: 'audits',
    title: 'Ask whether it holds',
    about: 'audits, sectors, sizes',
    sections: [
      {
        heading: 'Commutation',
        prose: `\`audit commute\` takes the model term by term. Where all commute the claim is proved for every size. Where one does not, the witness is the pair: which strings, on which spins they meet, and on how many of them they anticommute.`,
        example: `${ising}model biased = ising - 0.1 sum(v: vertices) s^z[v]\naudit commute biased with flip\n`,
      },
      {
        heading: 'The map itself',
        prose: `\`audit map\` asks two questions that are easily taken for one. Do the images commute as the originals do: decided for every size. Do products of originals that are a number keep that number: signs may depend on the size, so they are decided on the sizes listed. The second answer also names the sectors in which the map holds, on both sides, and how boundaries answer sectors.`,
        example: `${ising}${bonds}audit map bonds\n`,
      },
      {
        heading: 'Spectra, in sectors',
        prose: `A sector is written in brackets behind the model: laws, symmetries and rules with their values. A bare name means its declared value. The sizes follow \`on\`. Give the sector on both sides; the audit of the map tells you which.`,
        example: `${ising}${bonds}model gauge = bonds(ising)
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]
symmetry w1 = prod(l: loop(1)) g^z[l]
symmetry w2 = prod(l: loop(2)) g^z[l]
audit spectrum ising [flip = +1] ~ gauge [flat, w1, w2] on 2 x 2, 3 x 3 levels 6
`,
      },
      {
        heading: 'Ground states, expectation values, scans',
        prose: `\`audit degeneracy\` counts ground states with their multiplicity and gives the gap. \`audit expect\` takes an operator in the ground state, \`audit scan\` follows a gap, an energy, an overlap or an operator over one or two couplings.`,
        example: `lattice chain torus 8
spins s on vertices
couplings J = 1, h = 0.6
model ising = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]
audit degeneracy ising [flip = +1] on 8
audit scan gap of ising [flip = +1] over h = 0.5 .. 1.5 by 0.25 on 6, 8
`,
      },
      {
        heading: 'Effective models',
        prose: `\`audit effective\` treats what a model has beyond a solvable part by perturbation theory within the ground space of that part: on the infinite lattice, with exact rational coefficients and the couplings as symbols.`,
        example: `lattice honeycomb torus 3 x 3
spins s on vertices
couplings Jx = 1, Jy = 1, Jz = 10
model strong = - Jz sum(l: links.3) s^z[l.a] s^z[l.b]
model compass = strong
  - Jx sum(l: links.1) s^x[l.a] s^x[l.b]
  - Jy sum(l: links.2) s^y[l.a] s^y[l.b]
audit effective compass from strong order 2
`,
      },
    ],
  },
];
