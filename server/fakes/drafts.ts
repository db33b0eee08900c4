/** Further texts of the demonstration's notebooks; `notebooks.ts` says whose they are and what became of them. */

export const unrolled = String.raw`#@ title A chain that comes apart under a circuit
#@ author T. Vasara

#: Three spins meet in every term of this ring, and yet it is a ring of free spins in disguise. One layer of controlled-$z$ gates
#: between neighbours takes the disguise off; we print the step for the reading group.

lattice chain torus 6
spins s on vertices
couplings a = 1

model knit = - a sum(v: vertices) s^z[v + (-1)] s^x[v] s^z[v + (1)]

#~

map unknit = circuit
  cz s[v] s[v + (1)] for v: vertices

model free = unknit(knit)

#: Gates of the layer commute with one another, so their order is no question. What is left of each term should be one letter.

#~

audit map unknit
audit spectrum knit ~ free on 4, 6 levels 6
`;

export const ledger = String.raw`#@ title Counting bars on a board
#@ author L. Brandt

#: Bars lie on the links of a board so that every vertex is the end of exactly one. How fast does the number of patterns grow with
#: the board? Nothing here is ready to be shown: the boards are small, and I do not trust an extrapolation from four of them.

lattice square open 4 x 4
spins d on links

rule covered(v: vertices) = sum(l: star(v)) d^n[l] is 1

#~

audit count covered on 2 x 2, 2 x 3, 4 x 4, 4 x 5
`;

export const loops = String.raw`#@ title Closed loops, and four ways to be quiet
#@ author M. Itsuno

#: Two families of laws on the links of a square torus: an even number of raised links at each vertex, and no flux through any
#: plaquette. They commute, since a star and a rim share two links or none, and a torus leaves room for more than one state.

lattice square torus 2 x 3
spins e on links

law even(v: vertices) = prod(l: star(v)) e^z[l]
law calm(p: plaquettes) = prod(l: rim(p)) e^x[l]

model quiet = - sum(v: vertices) even(v) - sum(p: plaquettes) calm(p)

#~

audit laws even, calm
audit commute quiet with even, calm
audit degeneracy quiet on 2 x 2, 2 x 3
`;
