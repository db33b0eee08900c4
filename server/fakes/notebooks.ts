import { ledger, loops, unrolled } from './drafts.ts';

/**
 * The notebooks of the demonstration, as `.gw` texts, by the invented people of `people.ts`. `then` is what a notebook becomes
 * after its first edition, published as the second.
 */
export interface InventedNotebook {
  readonly owner: string;
  readonly people: readonly { readonly handle: string; readonly role: 'coauthor' | 'referee' | 'reader' }[];
  readonly visibility: 'private' | 'public';
  /** Of its first edition; null: nothing was published. */
  readonly summary: string | null;
  readonly source: string;
  readonly then?: {
    readonly summary: string;
    readonly add: readonly { readonly kind: 'prose' | 'statements'; readonly text: string }[];
  };
}

const magnet = String.raw`#@ title Gauging the flip of an uneven square magnet
#@ author R. Okafor
#@ author L. Brandt

#: A square magnet whose bonds are strong along the rows and weak along the columns. Only products of two neighbouring
#: $\sigma^z$ enter its energy, so we may ask for a description that knows bonds alone: one gauge spin for each link.

lattice square torus 3 x 3
spins s on vertices
spins b on links
couplings J = 1, K = 2/5, h = 0.7

#~

model magnet =
  - J sum(l: links.1) s^z[l.a] s^z[l.b]
  - K sum(l: links.2) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]

symmetry flip = prod(v: vertices) s^x[v]

#: Four bonds around a plaquette multiply to one, and so do the bonds of a closed row or column. On the gauge side these are
#: laws: no flux through any plaquette, and none through the two cycles of the torus.

law flat(p: plaquettes) = prod(l: rim(p)) b^z[l]
symmetry along = prod(l: loop(1)) b^z[l]
symmetry across = prod(l: loop(2)) b^z[l]

#: The dictionary. A bond becomes the $z$ of its link; turning one spin turns the four bonds that end there.

map bonds from s to b
  s^z[l.a] s^z[l.b] => b^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) b^x[l]  for v: vertices

model gauge = bonds(magnet)

#~

audit map bonds
audit commute gauge with flat
`;

const levels = [
  {
    kind: 'prose',
    text: 'A check with numbers. The dictionary should hold in the sector that is even under the flip, and there level by level.',
  },
  {
    kind: 'statements',
    text: `audit laws flat
audit spectrum magnet [flip = +1] ~ gauge [flat = +1, along = +1, across = +1] on 2 x 2, 2 x 3, 3 x 3 levels 6`,
  },
] as const;

const ring = String.raw`#@ title A ring, its walls, and a step taken in haste
#@ author L. Brandt

#: The ring in a transverse field, told by its domain walls. A first attempt forgets that a spin has two sides.

lattice chain torus 8
spins s on vertices
spins m on links
couplings J = 1, h = 0.6

model ring =
  - J sum(l: links) s^z[l.a] s^z[l.b]
  - h sum(v: vertices) s^x[v]
symmetry flip = prod(v: vertices) s^x[v]

#: In haste: turning a spin moves the wall to its right, and nothing else.

map hasty from s to m
  s^z[l.a] s^z[l.b] => m^x[l]                  for l: links
  s^x[v]            => prod(l: out(v)) m^z[l]  for v: vertices

audit map hasty

#: It fails: the bond to the left of the spin anticommutes with the turn, and its image does not. With both links it holds.

map walls from s to m
  s^z[l.a] s^z[l.b] => m^x[l]                   for l: links
  s^x[v]            => prod(l: star(v)) m^z[l]  for v: vertices

model dual = walls(ring)
symmetry even = prod(l: links) m^x[l]

#~

audit map walls
audit commute dual with even
audit spectrum ring [flip = +1] ~ dual [even = +1] on 6, 8 levels 6
audit degeneracy ring [flip = +1] on 8
`;

export const inventedNotebooks: readonly InventedNotebook[] = [
  {
    owner: 'rokafor',
    people: [
      { handle: 'lbrandt', role: 'coauthor' },
      { handle: 'mitsuno', role: 'referee' },
      { handle: 'dquell', role: 'reader' },
    ],
    visibility: 'public',
    summary: 'The dictionary, and what it keeps',
    source: magnet,
    then: { summary: 'Levels on three small tori', add: levels },
  },
  {
    owner: 'lbrandt',
    people: [
      { handle: 'rokafor', role: 'referee' },
      { handle: 'tvasara', role: 'reader' },
    ],
    visibility: 'private',
    summary: 'The wrong step kept beside the right one',
    source: ring,
  },
  {
    owner: 'tvasara',
    people: [{ handle: 'dquell', role: 'reader' }],
    visibility: 'public',
    summary: 'One layer of gates, printed for the reading group',
    source: unrolled,
  },
  {
    owner: 'lbrandt',
    people: [{ handle: 'rokafor', role: 'coauthor' }],
    visibility: 'private',
    summary: null,
    source: ledger,
  },
  {
    owner: 'mitsuno',
    people: [],
    visibility: 'public',
    summary: 'Laws, and how many states they leave',
    source: loops,
  },
];

/** Remarks on the first notebook, which is under review; `at`: words of the entry that they stand beside. */
export const inventedRemarks: readonly {
  readonly by: string;
  readonly at: string;
  readonly text: string;
  readonly answer?: { readonly by: string; readonly text: string };
}[] = [
  {
    by: 'mitsuno',
    at: 'map bonds from s to b',
    text: 'Is the sector of the magnet said anywhere? The product of all turns goes to $1$, so only the even half of its states has an image. @rokafor',
    answer: {
      by: 'lbrandt',
      text: 'Only in the audit of the levels, at the end. I would say it here, before the dictionary is used.',
    },
  },
  {
    by: 'mitsuno',
    at: 'audit spectrum magnet',
    text: 'Six levels agree. Do they go on agreeing for $K < 0$, where the columns want to alternate? On $3 \\times 3$ they cannot.',
  },
];

/** The reading group's copy of the first notebook: what it changed, and the letter with which it sent the difference. */
export const inventedFork = {
  title: 'Reading group: bonds of the uneven magnet',
  edition: 1,
  change: { from: '- K sum(l: links.2)', to: '+ K sum(l: links.2)' },
  letter:
    'We tried the magnet with columns that alternate: one sign is changed, and the dictionary does not mind. Perhaps worth a line in the text?',
} as const;
