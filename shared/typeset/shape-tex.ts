import type { Pauli } from '../algebra/pauli/types.ts';
import type { CellKind, Offset } from '../lattice/cells.ts';
import { letters, rank, singular, type Style } from './context.ts';
import { nameSpoken, nameTex } from './names.ts';
import { labelTex } from './ranges.ts';
import type { Shape, SpotGroup } from './shapes.ts';

/** One Pauli matrix: `s^{x}_{v}`, on the page wrapped in the macro that gives X, Y and Z their ink. */
export function pauliTex(species: string, pauli: Pauli, place: string, style: Style): string {
  const body = `${nameTex(species, { index: false })}^{${pauli}}_{${place}}`;
  return style === 'page' ? `\\p${pauli}{${body}}` : body;
}

/** `v+\hat{1}`, `v-2\hat{2}`; on a chain `v+3`. */
function shiftTex(letter: string, by: Offset): string {
  if (by.length === 1) {
    const c = by[0] ?? 0;
    return c === 0 ? letter : `${letter}${c > 0 ? '+' : '-'}${String(Math.abs(c))}`;
  }
  return by.reduce((all, c, d) => {
    if (c === 0) return all;
    const times = Math.abs(c) === 1 ? '' : String(Math.abs(c));
    return `${all}${c > 0 ? '+' : '-'}${times}\\hat{${String(d + 1)}}`;
  }, letter);
}

/** What stands for an anchor: the letter of its kind, `r` for a unit cell. */
export const anchorLetter = (shape: Shape): string => (shape.anchor === 'cell' ? 'r' : letters[shape.anchor]);

/** True where the ends of the anchor link are named a and b. */
export const hasEnds = (shape: Shape): boolean =>
  shape.shell !== undefined ||
  (shape.anchor === 'links' &&
    shape.groups.some((g) => g.spot.at === 'incident' && g.spot.kind === 'vertices' && g.spot.count === 2));

/** What runs over links or pairs of vertices: `\langle a,b\rangle`, doubled for second neighbours, tripled for third. */
export function pairTex([a, b]: readonly [string, string], shell = 1): string {
  if (shell > 3) return `\\langle ${a},${b}\\rangle_{${String(shell)}}`;
  const repeat = (bracket: string) => Array<string>(shell).fill(bracket).join('\\!');
  return `${repeat('\\langle')} ${a},${b}${repeat('\\rangle')}`;
}

/** True where the anchor's own letter occurs in the product. */
export const usesAnchor = (shape: Shape): boolean =>
  shape.named !== undefined ||
  shape.groups.some((g) => !(hasEnds(shape) && g.spot.at === 'incident' && g.spot.kind === 'vertices'));

/** The variable and its range in a product over incident cells: `l\ni v`, `l\in p`. */
function range(shape: Shape, kind: CellKind, letter: string): string {
  const anchor = anchorLetter(shape);
  const up = shape.anchor !== 'cell' && rank[kind] > rank[shape.anchor];
  return `${letter}${up ? '\\ni ' : '\\in '}${anchor}`;
}

/** A unit cell by its coordinates: `3`, `(1,0)`. */
export const placeTex = (offset: Offset): string =>
  offset.length === 1 ? String(offset[0] ?? 0) : `(${offset.join(',')})`;

/** Where a product stands: at the letter of its anchor, or still: at a place of its own, shifts being places. */
export type Standing = { readonly at: string } | undefined;

function groupTex(shape: Shape, g: SpotGroup, style: Style, still: Standing): { order: number; tex: string } {
  const at = still?.at;
  const anchor = at ?? anchorLetter(shape);
  switch (g.spot.at) {
    case 'self':
      return { order: 1, tex: pauliTex(g.species, g.pauli, anchor, style) };
    case 'neighbours':
      return { order: 3, tex: `\\prod_{u\\sim ${anchor}}${pauliTex(g.species, g.pauli, 'u', style)}` };
    case 'incident': {
      const letter = letters[g.spot.kind];
      const over = range(shape, g.spot.kind, letter);
      return {
        order: 3,
        tex: `\\prod_{${at === undefined ? over : `${letter}${over.includes('\\ni') ? '\\ni ' : '\\in '}${at}`}}${pauliTex(g.species, g.pauli, letter, style)}`,
      };
    }
    case 'run': {
      const { cell, direction, count } = g.spot;
      const start = still ? placeTex(cell.by) : shiftTex(anchor, cell.by);
      const place = `${start}+k${cell.by.length === 1 ? '' : `\\hat{${String(direction + 1)}}`}`;
      const body = pauliTex(g.species, g.pauli, cell.label === '' ? place : `${place},${labelTex(cell.label)}`, style);
      return { order: 3, tex: `\\prod_{k=0}^{${String(count - 1)}}${body}` };
    }
    case 'shifts': {
      const words = g.spot.cells.map((c) => {
        const place = still ? placeTex(c.by) : shiftTex(anchor, c.by);
        return pauliTex(g.species, g.pauli, c.label === '' ? place : `${place},${labelTex(c.label)}`, style);
      });
      return { order: 2, tex: words.join(' ') };
    }
  }
}

/** Letters of the two ends of a link: a and b, unless spins of the model bear those names. */
export function endLetters(names: Iterable<string>): readonly [string, string] {
  const taken = new Set(names);
  const free = (
    [
      ['a', 'b'],
      ['i', 'j'],
      ['u', 'w'],
    ] as const
  ).find(([a, b]) => !taken.has(a) && !taken.has(b));
  return free ?? ['v', "v'"];
}

/** How a product is set: where it stands, and the names of the model's species, which no letter for a link's end may bear. */
export interface Setting {
  readonly still?: Standing;
  readonly species?: Iterable<string>;
}

/** The product that a shape is, at its anchor's letter or where it stands still. */
export function shapeTex(shape: Shape, style: Style, { still, species = [] }: Setting = {}): string {
  if (shape.named !== undefined)
    return `${nameTex(shape.named, { index: false })}_{${still?.at ?? anchorLetter(shape)}}`;
  const ends = hasEnds(shape) && still === undefined;
  const isEnds = (g: SpotGroup) => ends && g.spot.at === 'incident' && g.spot.kind === 'vertices';
  const rest = shape.groups
    .filter((g) => !isEnds(g))
    .map((g) => groupTex(shape, g, style, still))
    .sort((a, b) => a.order - b.order)
    .map((g) => g.tex);
  const [first, second] = endLetters(species).map((end) =>
    shape.groups.filter(isEnds).map((g) => pauliTex(g.species, g.pauli, end, style)),
  );
  return [...(first ?? []), ...rest, ...(second ?? [])].join(' ');
}

const spokenShift = (by: Offset): string => {
  const words = by.flatMap((c, d) =>
    c === 0 ? [] : [`${c > 0 ? 'plus' : 'minus'} ${String(Math.abs(c))} along direction ${String(d + 1)}`],
  );
  return words.join(' and ');
};

/** What a screen reader says for the product. */
export function shapeSpoken(shape: Shape): string {
  if (shape.named !== undefined)
    return `${nameSpoken(shape.named)} at the ${shape.anchor === 'cell' ? 'cell' : singular[shape.anchor]}`;
  if (shape.shell !== undefined)
    return shape.groups.map((g) => `${nameSpoken(g.species)} ${g.pauli} on both`).join(' times ');
  const word = shape.anchor === 'cell' ? 'cell' : singular[shape.anchor];
  return shape.groups
    .map((g) => {
      const name = `${nameSpoken(g.species)} ${g.pauli}`;
      switch (g.spot.at) {
        case 'self':
          return `${name} on the ${word}`;
        case 'neighbours':
          return `the product of ${name} over the neighbours of the ${word}`;
        case 'incident': {
          const { kind } = g.spot;
          if (shape.anchor === 'links' && kind === 'vertices') return `${name} on both ends of the link`;
          const up = shape.anchor !== 'cell' && rank[kind] > rank[shape.anchor];
          return `the product of ${name} over the ${kind} ${up ? 'at' : 'around'} the ${word}`;
        }
        case 'run':
          return `the product of ${name} over ${String(g.spot.count)} ${g.spot.cell.kind} in a row along direction ${String(g.spot.direction + 1)}`;
        case 'shifts':
          return g.spot.cells
            .map((c) => {
              const shift = spokenShift(c.by);
              const label = c.label === '' ? '' : ` ${singular[c.kind]} ${c.label}`;
              return `${name} on${label === '' ? ` the ${word}` : label}${shift === '' ? '' : ` ${shift}`}`;
            })
            .join(' times ');
      }
    })
    .join(' times ');
}
