import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Worked } from '../../shared/contracts/catalogue.ts';
import { notebookFromText } from '../../shared/notebook/text.ts';

type Listed = Omit<Worked, 'title'>;

const kramers = { citation: 'H. A. Kramers, G. H. Wannier, Phys. Rev. 60, 252 (1941)', doi: '10.1103/PhysRev.60.252' };
const wegner = { citation: 'F. J. Wegner, J. Math. Phys. 12, 2259 (1971)', doi: '10.1063/1.1665530' };

/** The table of worked derivations, in the order in which they teach. Each text lies beside it as NAME.gw. */
const table: readonly Listed[] = [
  {
    name: 'ising-ring',
    shows: 'Field and coupling of a ring change places, and each sector finds its partner with a seam.',
    lattice: 'chain',
    symmetry: 'global flip',
    hand: 'a spin model',
    sources: [kramers, { citation: 'P. Pfeuty, Ann. Phys. 57, 79 (1970)', doi: '10.1016/0003-4916(70)90270-8' }],
  },
  {
    name: 'periodic-with-periodic',
    shows: 'A right dictionary, two periodic rings, and spectra that differ: why, and what was left out.',
    lattice: 'chain',
    symmetry: 'global flip',
    hand: 'two spectra that differ',
    sources: [
      kramers,
      {
        citation: 'E. Cobanera, G. Ortiz, Z. Nussinov, Adv. Phys. 60, 679 (2011)',
        doi: '10.1080/00018732.2011.619814',
      },
    ],
  },
  {
    name: 'wegner-square',
    shows: 'A magnet in the variables of its bonds is a gauge theory without flux; holonomies are seams.',
    lattice: 'square',
    symmetry: 'global flip',
    hand: 'a spin model',
    sources: [wegner, { citation: 'J. B. Kogut, Rev. Mod. Phys. 51, 659 (1979)', doi: '10.1103/RevModPhys.51.659' }],
  },
  {
    name: 'higgs-square',
    shows: 'A flip symmetry made local, the Gauss law that follows, and the matter removed again in unitary gauge.',
    lattice: 'square',
    symmetry: 'global flip',
    hand: 'a spin model',
    sources: [{ citation: 'E. Fradkin, S. H. Shenker, Phys. Rev. D 19, 3682 (1979)', doi: '10.1103/PhysRevD.19.3682' }],
  },
  {
    name: 'toric-code-field',
    shows: 'A code in a field is a transverse-field magnet in its even sector, at a constant cost of energy.',
    lattice: 'square',
    symmetry: 'gauge law',
    hand: 'a stabilizer code',
    sources: [
      { citation: 'A. Yu. Kitaev, Ann. Phys. 303, 2 (2003)', doi: '10.1016/S0003-4916(02)00018-0' },
      {
        citation: 'S. Trebst, P. Werner, M. Troyer, K. Shtengel, C. Nayak, Phys. Rev. Lett. 98, 070602 (2007)',
        doi: '10.1103/PhysRevLett.98.070602',
      },
    ],
  },
  {
    name: 'cluster-two-chains',
    shows: 'The cluster chain in a field comes apart into two Ising chains where both parities are even.',
    lattice: 'chain',
    symmetry: 'global flip',
    hand: 'a stabilizer code',
    sources: [
      {
        citation: 'A. C. Doherty, S. D. Bartlett, Phys. Rev. Lett. 103, 020506 (2009)',
        doi: '10.1103/PhysRevLett.103.020506',
      },
    ],
  },
  {
    name: 'plaquette-ising',
    shows: 'Four-spin couplings in a field, with a symmetry for each row and column, are dual to themselves.',
    lattice: 'square',
    symmetry: 'rows and columns',
    hand: 'a spin model',
    sources: [
      { citation: 'C. Xu, J. E. Moore, Phys. Rev. Lett. 93, 047003 (2004)', doi: '10.1103/PhysRevLett.93.047003' },
    ],
  },
  {
    name: 'honeycomb-plaquettes',
    shows: 'A model in which no spin is conserved and every hexagon is; its strong bonds make a toric code.',
    lattice: 'honeycomb',
    symmetry: 'conserved plaquettes',
    hand: 'a spin model',
    sources: [{ citation: 'A. Kitaev, Ann. Phys. 321, 2 (2006)', doi: '10.1016/j.aop.2005.10.005' }],
  },
  {
    name: 'odd-honeycomb',
    shows: 'A gauge theory with one charge at every vertex is a frustrated magnet on the triangular lattice.',
    lattice: 'honeycomb',
    symmetry: 'gauge law',
    hand: 'a gauge theory',
    sources: [
      {
        citation: 'R. Moessner, S. L. Sondhi, E. Fradkin, Phys. Rev. B 65, 024504 (2001)',
        doi: '10.1103/PhysRevB.65.024504',
      },
    ],
  },
  {
    name: 'wegner-cubic',
    shows: 'In three dimensions the gauge theory of links is dual to itself, flux against electric field.',
    lattice: 'cubic',
    symmetry: 'gauge law',
    hand: 'a gauge theory',
    sources: [
      wegner,
      {
        citation: 'R. Balian, J. M. Drouffe, C. Itzykson, Phys. Rev. D 11, 2098 (1975)',
        doi: '10.1103/PhysRevD.11.2098',
      },
    ],
  },
  {
    name: 'decorated-walls',
    shows: 'A circuit binds charges to domain walls; both symmetries and the spectrum stay as they are.',
    lattice: 'square',
    symmetry: 'global flip',
    hand: 'a spin model',
    sources: [
      { citation: 'X. Chen, Y.-M. Lu, A. Vishwanath, Nat. Commun. 5, 3507 (2014)', doi: '10.1038/ncomms4507' },
      { citation: 'B. Yoshida, Phys. Rev. B 93, 155131 (2016)', doi: '10.1103/PhysRevB.93.155131' },
    ],
  },
  {
    name: 'spin-one-pairs',
    shows: 'Three states out of four, left out in two ways: a state map from a ladder to symmetric pairs.',
    lattice: 'chain',
    symmetry: 'none',
    hand: 'states with a rule',
    sources: [
      {
        citation: 'I. Affleck, T. Kennedy, E. H. Lieb, H. Tasaki, Commun. Math. Phys. 115, 477 (1988)',
        doi: '10.1007/BF01218021',
      },
    ],
  },
];

/** Beside this file in a checkout; the build copies the texts to a folder beside the server's bundles. */
const folder = import.meta.url.endsWith('.ts') ? './' : './catalogue/';
const textOf = (name: string): string =>
  readFileSync(fileURLToPath(new URL(`${folder}${name}.gw`, import.meta.url)), 'utf8');

let read: readonly (Worked & { readonly source: string })[] | undefined;

/** All worked derivations with their texts and the titles that these carry; read once. */
export function worked(): readonly (Worked & { readonly source: string })[] {
  read ??= table.map((listed) => {
    const source = textOf(listed.name);
    return { ...listed, title: notebookFromText(source).title ?? listed.name, source };
  });
  return read;
}
