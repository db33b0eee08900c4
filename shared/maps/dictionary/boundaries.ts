import { StabilizerGroup } from '../../algebra/finite/group.ts';
import { turned } from '../../algebra/finite/string.ts';
import type { FiniteString, SiteTable } from '../../algebra/finite/types.ts';
import { anticommutesOnSite, crosses } from '../../algebra/finite/wrap.ts';
import { extendedKey } from '../../algebra/pauli/extended.ts';
import type { Extended, Pauli } from '../../algebra/pauli/types.ts';
import type { Size } from '../../lattice/cells.ts';
import { newCluster, type Cluster } from '../../lattice/cluster.ts';
import type { Budget } from '../../limits.ts';
import { speciesOf, type Context } from '../context.ts';
import { extendedPhrase } from '../phrases.ts';
import type { DictionaryDeclaration } from './declaration.ts';
import { isExtended } from './decompose.ts';
import type { Sector } from './sectors.ts';
import { forced, instances, tableOf, type Instance, type SizeFindings } from './sizes.ts';

/** What a seam on one side of a map asks of the sectors. */
export interface Boundary {
  readonly side: 'left' | 'right';
  /** The on-site symmetry of the seam, by name or in words, and the direction that the seam closes, from 1. */
  readonly symmetry: string;
  readonly direction: number;
  /** Sectors that take another value than without the seam. */
  readonly left: readonly string[];
  readonly right: readonly string[];
  /** No sector answers: with the seam a relation has opposite signs on the two sides. */
  readonly none: boolean;
}

/** More generators than these are not twisted one seam after another. */
const mostGenerators = 600;

const paulis: readonly Pauli[] = ['x', 'y', 'z'];

/** On-site products over a whole species, and declared symmetries of this form, that commute with all local sides. */
function onSite(
  species: readonly string[],
  sides: readonly DictionaryDeclaration['rules'][number]['left'][],
  context: Context,
): { readonly text: string; readonly extended: Extended }[] {
  const { family, values } = context;
  const zero = family.vectors.map(() => 0);
  const whole = species.flatMap((name) => {
    const value = speciesOf(context, name);
    return value
      ? paulis.map((pauli): Extended => ({
          phase: 0,
          parts: value.classes.map((index) => ({
            string: { phase: 0, factors: [{ species: name, cell: { kind: value.kind, index, offset: zero }, pauli }] },
            steps: zero.map(() => 1),
            needs: [],
          })),
        }))
      : [];
  });
  const named = [...values.all.values()].flatMap((value) =>
    value.what === 'symmetry' &&
    value.extended.parts.length > 0 &&
    value.extended.parts.every(
      ({ string, steps }) =>
        string.factors.length === 1 &&
        string.factors.every((f) => species.includes(f.species)) &&
        steps.every((m) => m === 1),
    )
      ? [{ text: value.name, extended: value.extended }]
      : [],
  );
  const all = [...named, ...whole.map((extended) => ({ text: extendedPhrase(extended, family), extended }))];
  const distinct = [...new Map([...all].reverse().map((one) => [extendedKey(one.extended), one])).values()].reverse();
  return distinct.filter(({ extended }) =>
    sides.every((side) => isExtended(side) || !anticommutesOnSite(side, extended)),
  );
}

/** One side's strings where a seam stands between the last unit cell of its direction and the first. */
function seamed(
  items: readonly Instance[],
  side: 'left' | 'right',
  { rules }: DictionaryDeclaration,
  seam: { readonly symmetry: Extended; readonly direction: number },
  table: SiteTable,
  cluster: Cluster,
): FiniteString[] {
  return items.map((item) => {
    const local = rules[item.rule]?.[side];
    const turn = local && !isExtended(local) && crosses(table, cluster, local, item.by, [seam]);
    return turn ? turned(item[side], 2) : item[side];
  });
}

/** Sectors that take the other value in a group of the same strings with other signs; undefined where one is turned in part only. */
function turnedSectors(group: StabilizerGroup, sectors: readonly Sector[]): string[] | undefined {
  const out: string[] = [];
  for (const { words, value, strings } of sectors) {
    // phase 0: the string itself is +1; 2: it is −1
    const values = strings.map((string) => (group.membership(string)?.phase === 2 ? -1 : 1));
    const turns = values.filter((own) => own !== value).length;
    if (turns > 0 && turns < strings.length) return undefined;
    if (turns > 0) out.push(`${words} = ${value === 1 ? '-1' : '+1'}`);
  }
  return out;
}

/**
 * Boundary conditions and sectors that answer one another (E. Cobanera, G. Ortiz, Z. Nussinov, Adv. Phys. 60, 679 (2011), section 3.11): a
 * seam changes the signs of relations that close around the lattice on its side, hence the values that these force on the other. Exact, on one size.
 */
export function boundaries(
  declaration: DictionaryDeclaration,
  context: Context,
  size: Size,
  found: SizeFindings,
  budget: Budget,
): Boundary[] {
  const cluster = newCluster(context.lattice, size);
  if (!('unitCells' in cluster) || found.generators > mostGenerators) return [];
  const tables = {
    left: tableOf(context, cluster, declaration.from),
    right: tableOf(context, cluster, declaration.to),
  };
  const items = instances(declaration, tables.left, tables.right, cluster, budget);
  const [n, m] = [tables.left.sites.length, tables.right.sites.length];
  const plain = { left: items.map((i) => i.left), right: items.map((i) => i.right) };
  const out: Boundary[] = [];
  for (const side of ['left', 'right'] as const) {
    const species = side === 'left' ? declaration.from : declaration.to;
    const sides = declaration.rules.map((rule) => rule[side]);
    for (const { text, extended } of onSite(species, sides, context))
      for (const direction of context.lattice.periodic.flatMap((periodic, d) => (periodic ? [d + 1] : []))) {
        const strings = seamed(items, side, declaration, { symmetry: extended, direction }, tables[side], cluster);
        const left = side === 'left' ? strings : plain.left;
        const right = side === 'right' ? strings : plain.right;
        const onRight = new StabilizerGroup(m, forced(new StabilizerGroup(n, left, budget), right, m, budget), budget);
        const onLeft = new StabilizerGroup(n, forced(new StabilizerGroup(m, right, budget), left, n, budget), budget);
        const none = onRight.containsMinusOne || onLeft.containsMinusOne;
        const changes = [turnedSectors(onLeft, found.leftSectors), turnedSectors(onRight, found.rightSectors)];
        // a seam that turns laws at some cells only puts charges there; it is no mere boundary
        if (!none && changes.includes(undefined)) continue;
        const [turnedLeft = [], turnedRight = []] = none ? [] : changes;
        const boundary: Boundary = { side, symmetry: text, direction, left: turnedLeft, right: turnedRight, none };
        const effect = (b: Boundary): string =>
          JSON.stringify([b.side, b.direction, b.left, b.right, b.none ? b.symmetry : '']);
        const told = out.some((other) => effect(other) === effect(boundary));
        if (none || (turnedLeft.length + turnedRight.length > 0 && !told)) out.push(boundary);
      }
  }
  return out;
}

/** "with a seam of flip around direction 1 on the left: w1 = -1 on the right". */
export function boundaryWords({ side, symmetry, direction, left, right, none }: Boundary): string {
  const seam = `with a seam of ${symmetry} around direction ${String(direction)} on the ${side}`;
  if (none) return `${seam} no sector answers`;
  const parts = [
    ...(left.length > 0 ? [`${left.join(', ')} on the left`] : []),
    ...(right.length > 0 ? [`${right.join(', ')} on the right`] : []),
  ];
  return `${seam}: ${parts.join(' and ')}`;
}
