import type { SiteTable } from '../algebra/finite/types.ts';
import type { MapValue, StateBlock } from '../language/values.ts';
import { sizeText, type Cluster } from '../lattice/cluster.ts';
import { shifted, type Offset } from '../lattice/cells.ts';
import { MapRefused } from '../maps/refusals.ts';
import { inverseStates, isometryOf, type StatesDeclaration } from '../maps/states/isometry.ts';
import type { ImageBlocks } from '../spectra/bases/image-blocks.ts';
import { fitting, Unanswerable } from './unanswerable.ts';

/** The state map that a name in a sector stands for: itself, or what undoes one. Throws Unanswerable. */
function statesOf({ name, declaration }: MapValue): StatesDeclaration {
  if (declaration.kind === 'states') return declaration;
  if (declaration.kind === 'inverse') {
    try {
      return inverseStates(statesOf(declaration.of));
    } catch (error) {
      if (error instanceof MapRefused) throw new Unanswerable(error.message, true);
      throw error;
    }
  }
  throw new Unanswerable(`${name} is not a state map, so it has no image that could be a sector`, true);
}

/** The cells a translate of a block stands on; undefined where its anchor is past an open edge. */
function landed(block: StateBlock, by: Offset, cluster: Cluster, table: SiteTable, name: string): number[] | undefined {
  if (cluster.number(shifted(block.anchor, by)) === undefined) return undefined;
  const spins = block.to.map((s) => table.number({ species: s.species, cell: shifted(s.cell, by) }));
  if (spins.every((s) => s !== undefined)) return spins;
  throw new Unanswerable(
    `a block of ${name} is cut by the open edge on ${sizeText(cluster.size)}: it names a spin that is not there`,
  );
}

/** A state map's orthonormal images and the spins of its blocks on a cluster, as plain data. Throws Unanswerable. */
export function imageBlocks(cluster: Cluster, table: SiteTable, map: MapValue): ImageBlocks {
  const declaration = statesOf(map);
  const { matrix, listed, overlaps } = isometryOf(declaration);
  const [overlap] = overlaps;
  if (overlap)
    throw new Unanswerable(
      `the images of |${overlap.first}> and |${overlap.second}> under ${map.name} are not orthonormal: it is no isometry, and its image no sector`,
    );
  const wanted = listed.map((bits) => parseInt(bits, 2));
  const columns = matrix.map((row) => wanted.flatMap((k) => row[k] ?? []));
  const blocks = fitting(`map ${map.name}`, cluster, () =>
    declaration.blocks.flatMap((block) => {
      if (!cluster.admits(block.steps))
        throw new Unanswerable(
          `${map.name} does not fit on ${sizeText(cluster.size)}: its period is ${block.steps.join(' x ')}`,
        );
      const along = (pick: (...n: number[]) => number): number[] =>
        Array.from({ length: cluster.dimension }, (_, d) => pick(block.anchor.offset[d] ?? 0));
      return cluster
        .orbit(block.steps, along(Math.min), along(Math.max))
        .flatMap((by) => [landed(block, by, cluster, table, map.name)].filter((spins) => spins !== undefined));
    }),
  );
  return { columns, blocks };
}
