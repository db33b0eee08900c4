import type { Chapter } from './chapter.ts';

/** What each grade says and does not say, and how a cluster misleads. */
export const evidence: Chapter = {
  name: 'evidence',
  title: 'What the grades mean',
  about: 'proved, exact, numerical, refuted, open; small clusters',
  sections: [
    {
      heading: 'Five words',
      prose: `- **Proved**: decided symbolically for every size of the lattice family. The claim says from which size on, for which multiples, and what it leaves open.
- **Exact**: decided by exact arithmetic, on the sizes that are listed and no others.
- **Numerical**: agreed within a stated tolerance, with a bound on each residual, on the sizes that are listed. That the lowest levels agree is not equality of the spectra.
- **Refuted**: here is the witness: a pair and where it meets, a relation with its signs, or a level that differs by more than both bounds.
- **Open**: not decided, with the reason: a limit, a coupling without a value, or a question beyond the method.

Nobody writes a grade. It follows from the kind of evidence, and the claims of an edition are computed by the server, whatever a browser showed.`,
    },
    {
      heading: 'What commutation does not say',
      prose: `A dictionary may keep every commutator and still be wrong. On one site $XX$, $YY$ and $ZZ$ of two spins commute and multiply to $-1$; images that multiply to $+1$ keep all commutators and no duality. Hence the second claim of \`audit map\`.`,
      example: `lattice chain torus 4
spins p on vertices
spins q on vertices
spins a on vertices
spins b on vertices
map wrong from p, q to a, b
  p^x[v] q^x[v] => a^z[v]        for v: vertices
  p^y[v] q^y[v] => b^z[v]        for v: vertices
  p^z[v] q^z[v] => a^z[v] b^z[v] for v: vertices
audit map wrong
`,
    },
    {
      heading: 'Signs that depend on the size',
      prose: `The product of all cluster terms of a ring of $N$ spins is $(-1)^N$ times the product of all $X$. No proof for every size can give one sign to that. Relations that close around the lattice are decided size by size; a claim on even sizes says nothing of odd ones.`,
    },
    {
      heading: 'When not to trust a small cluster',
      prose: `- **Sizes one and two wrap.** On a torus of extent two, two links join the same pair of vertices; of extent one, a link ends where it began. Terms then coincide or cancel. Such sizes carry a caution; begin at three.
- **No phase.** A finite cluster has no transition: a gap that is small is not one that closes, and two ground states may be one and its neighbour, split by an amount that falls exponentially with the length. Compare several sizes before you speak of degeneracy.
- **Shape.** A tilted or long torus may frustrate an order that the plane allows. Ask on sizes that fit the order's unit cell.
- **Sector.** On a torus the dual of a periodic model is periodic in one sector only. Levels that differ may just be levels of another sector.
- **Loops.** An equal-time loop in the ground state is not the loop in space and time that tells confinement. With matter, even that loop does not tell: the ratio of open to closed ones does, and needs lengths that a small cluster lacks.
- **A few levels.** Six equal levels are six equal levels. Where a spectrum can be had in full, ask for as many levels as the sector has states.`,
    },
    {
      heading: 'Constants and conventions',
      prose: `Constants are kept: a flux that the map turns into the number one goes on costing its energy. Which of $X$ and $Z$ is called electric is a convention; here the electric field is what the Gauss law multiplies around a vertex. An overall basis change moves no level.`,
    },
  ],
};
