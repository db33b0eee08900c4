import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import type { Site } from './supports.ts';

/** An operator put together cell by cell on the plate, and its text in the operator language. */

export const siteKey = (site: Omit<Site, 'pauli'>): string =>
  `${site.species} ${site.kind} ${String(site.index)} ${site.offset.join(' ')}`;

export type Built = ReadonlyMap<string, Site>;

const next = { x: 'y', y: 'z', z: null } as const;

/** A spin pressed once more: nothing, X, Y, Z, nothing. */
export function pressed(built: Built, spin: Omit<Site, 'pauli'>): Built {
  const key = siteKey(spin);
  const now = built.get(key);
  const pauli = now ? next[now.pauli] : 'x';
  const all = new Map(built);
  if (pauli === null) all.delete(key);
  else all.set(key, { ...spin, pauli });
  return all;
}

/** `links.2`, or the bare kind of a single class; undefined where no label tells the class apart from the others. */
function classText(family: LatticeFamily, kind: Site['kind'], index: number): string | undefined {
  const classes = family[kind];
  if (classes.length === 1) return kind;
  const own = classes[index]?.labels.find((label) => classes.filter((c) => c.labels.includes(label)).length === 1);
  return own === undefined ? undefined : `${kind}.${own}`;
}

/** Whether the language can name single cells of a class: by a label, or, for links, by the classes of their ends. */
export function canBeNamed(family: LatticeFamily, kind: Site['kind'], index: number): boolean {
  const link = kind === 'links' ? family.links[index] : undefined;
  if (classText(family, kind, index) !== undefined) return true;
  return link !== undefined && [link.a, link.b].every((end) => classText(family, 'vertices', end.index) !== undefined);
}

const axes = ['x', 'y', 'z'] as const;

/** One Pauli matrix: `s^x[vertices(1, 0)]`; on a link whose class has no label of its own (kagome), as a product of one factor. */
function factorText(family: LatticeFamily, { species, pauli, kind, index, offset }: Site): string {
  const words = classText(family, kind, index);
  if (words !== undefined) return `${species}^${pauli}[${words}(${offset.join(', ')})]`;
  const link = family.links[index];
  const label = link?.labels[0];
  const ends = (['a', 'b'] as const).map(
    (end) => `l.${end} in ${(link && classText(family, 'vertices', link[end].index)) ?? 'vertices'}`,
  );
  const place = offset.map((c, d) => `l.${axes[d] ?? 'x'} == ${String(c)}`);
  const cells = label === undefined ? 'links' : `links.${label}`;
  return `(prod(l: ${cells} where ${[...ends, ...place].join(' and ')}) ${species}^${pauli}[l])`;
}

/** A name that is not declared yet: W, W2, W3 … */
export function freeName(taken: ReadonlySet<string>): string {
  for (let k = 1; ; k += 1) {
    const name = k === 1 ? 'W' : `W${String(k)}`;
    if (!taken.has(name)) return name;
  }
}

/** The statement that declares the operator; empty while nothing is pressed. */
export function operatorText(family: LatticeFamily, built: Built, name: string): string {
  const factors = [...built.values()].map((site) => factorText(family, site));
  return factors.length === 0 ? '' : `operator ${name} = ${factors.join(' ')}`;
}
