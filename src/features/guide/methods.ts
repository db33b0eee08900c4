import type { Chapter } from './chapter.ts';

/** What is computed how, with the published source of each method. */
export const methods: Chapter = {
  name: 'methods',
  title: 'Methods and their sources',
  about: 'how each claim is decided, with citations',
  sections: [
    {
      heading: 'Every size at once',
      prose: `A translation-invariant Pauli term is a vector of Laurent polynomials over the field of two elements. Two families commute on the infinite lattice exactly if their symplectic product vanishes, and then on every torus on which they do not meet themselves; smaller ones are decided one by one. A coefficient or condition of period $m$ is treated on the enlarged cell. J. Haah, Commun. Math. Phys. **324**, 351 (2013).

Local symmetries are the syzygies of the terms, found by Gröbner bases over these polynomials; superfluous pairs are left out as in R. Gebauer, H. M. Möller, J. Symb. Comput. **6**, 275 (1988).`,
    },
    {
      heading: 'Laws on a cluster',
      prose: `Independent number, relations with their signs and logical operators by elimination over two elements, with the phases carried along: D. Gottesman, Stabilizer Codes and Quantum Error Correction, thesis, Caltech (1997); logical pairs by symplectic orthogonalisation: M. M. Wilde, Phys. Rev. A **79**, 062322 (2009).`,
    },
    {
      heading: 'Maps',
      prose: `- **Dictionaries** are homomorphisms of bond algebras; relations, sectors and boundary terms follow E. Cobanera, G. Ortiz, Z. Nussinov, Adv. Phys. **60**, 679 (2011).
- **Gauging**: F. J. Wegner, J. Math. Phys. **12**, 2259 (1971); J. B. Kogut, Rev. Mod. Phys. **51**, 659 (1979).
- **Unitary gauge**: E. Fradkin, S. H. Shenker, Phys. Rev. D **19**, 3682 (1979).
- **Circuits** act on Pauli strings as in D. Gottesman, arXiv:quant-ph/9807006 (1998); the names of gates are those of OpenQASM 3, A. Cross et al., ACM Trans. Quantum Comput. **3**, 12 (2022).
- **State maps** are exact matrices on one block, with entries in the rationals and their square roots.`,
    },
    {
      heading: 'Numbers',
      prose: `Coefficients are exact until a matrix is made. Symmetries that are Pauli strings remove one spin each, exactly: S. Bravyi, J. M. Gambetta, A. Mezzacapo, K. Temme, arXiv:1701.08213 (2017).

Small sectors are diagonalised in full, as in H. Bowdler, R. S. Martin, C. Reinsch, J. H. Wilkinson, Numer. Math. **11**, 293 (1968). Larger ones give their lowest levels by a thick-restart Lanczos method with locking, K. Wu, H. Simon, SIAM J. Matrix Anal. Appl. **22**, 602 (2000); a Krylov space sees each level only as often as it has start vectors, so further starts look for the copies of a level until the rest is seen to lie higher. Each level comes with the norm of its residual, within which a true level lies.`,
    },
    {
      heading: 'Effective models',
      prose: `The effective Hamiltonian is the canonical one, Hermitian and additive over independent parts: C. Bloch, Nucl. Phys. **6**, 329 (1958); J. des Cloizeaux, Nucl. Phys. **20**, 321 (1960); M. Takahashi, J. Phys. C **10**, 1289 (1977). It equals the direct rotation of S. Bravyi, D. P. DiVincenzo, D. Loss, Ann. Phys. **326**, 2793 (2011). Only connected sets of perturbing terms contribute, so each coefficient is that of the infinite lattice, a rational function of the couplings.`,
    },
    {
      heading: 'Checked against',
      prose: `The tests compare with values that others printed: levels of the ring (P. Pfeuty, Ann. Phys. **57**, 79 (1970)), dimers on the chessboard (P. W. Kasteleyn, Physica **27**, 1209 (1961)), ice on a torus (E. H. Lieb, Phys. Rev. **162**, 162 (1967)), dimers on kagome (G. Misguich, D. Serban, V. Pasquier, Phys. Rev. Lett. **89**, 137202 (2002)), the logical spins of codes in three dimensions (J. Haah, Phys. Rev. A **83**, 042330 (2011); S. Vijay, J. Haah, L. Fu, Phys. Rev. B **94**, 235157 (2016)), and the fourth order of the honeycomb model (A. Kitaev, Ann. Phys. **321**, 2 (2006)).`,
    },
  ],
};
