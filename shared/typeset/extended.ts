import { compareOffsets } from '../algebra/pauli/string.ts';
import type { Extended, Pauli, ProductPart, Steps } from '../algebra/pauli/types.ts';
import { classLabel, type CellKind, type Offset } from '../lattice/cells.ts';
import { coloopLinks, loopLinks, membraneLinks, type SteppedCell } from '../lattice/windings.ts';
import { labelsOf, letters, type Style, type TypesetContext } from './context.ts';
import { nameSpoken } from './names.ts';
import { classesTex, conditionsSpoken, conditionsTex, labelTex, residueOf } from './ranges.ts';
import { placed } from './shapes.ts';
import { pauliTex, placeTex, shapeTex } from './shape-tex.ts';

/** Single-Pauli parts of one species, Pauli and kind. */
interface Orbit {
  readonly species: string;
  readonly pauli: Pauli;
  readonly kind: CellKind;
  readonly members: { readonly index: number; readonly offset: Offset; readonly steps: Steps }[];
}

const signs = ['', '\\mathrm{i}\\,', '-', '-\\mathrm{i}\\,'] as const;

function orbits(extended: Extended): { orbits: Orbit[]; others: ProductPart[] } {
  const found = new Map<string, Orbit>();
  const others: ProductPart[] = [];
  for (const p of extended.parts) {
    const [f, ...more] = p.string.factors;
    if (!f || more.length > 0 || p.string.phase !== 0) {
      others.push(p);
      continue;
    }
    const key = `${f.species}^${f.pauli} ${f.cell.kind}`;
    const orbit = found.get(key) ?? { species: f.species, pauli: f.pauli, kind: f.cell.kind, members: [] };
    found.set(key, orbit);
    orbit.members.push({ index: f.cell.index, offset: f.cell.offset, steps: p.steps });
  }
  return { orbits: [...found.values()], others };
}

const memberKey = (index: number, offset: Offset, steps: Steps): string =>
  `${String(index)}@${residueOf(offset, steps).join(',')}/${steps.join(',')}`;

const sameSet = (cells: unknown, members: Orbit['members']): boolean => {
  if (!Array.isArray(cells)) return false;
  const keys = (cells as SteppedCell[]).map((c) => memberKey(c.cell.index, c.cell.offset, c.steps)).sort();
  const own = members.map((m) => memberKey(m.index, m.offset, m.steps)).sort();
  return keys.length === own.length && keys.every((k, n) => k === own[n]);
};

/** A cycle, a cut or a membrane that the lattice knows by name. */
function winding(orbit: Orbit, { family }: TypesetContext): { tex: string; spoken: string } | undefined {
  if (orbit.kind !== 'links') return undefined;
  for (let d = 1; d <= family.dimension; d++) {
    if (sameSet(loopLinks(family, d), orbit.members))
      return { tex: `C_{${String(d)}}`, spoken: `a cycle around direction ${String(d)}` };
    if (family.dimension === 2 && sameSet(coloopLinks(family, d), orbit.members))
      return {
        tex: `C^{*}_{${String(d)}}`,
        spoken: `the links that a dual cycle around direction ${String(d)} crosses`,
      };
    if (family.dimension === 3 && sameSet(membraneLinks(family, d), orbit.members))
      return { tex: `M_{${String(d)}}`, spoken: `the links that pierce a dual plane across direction ${String(d)}` };
  }
  return undefined;
}

/** Classes on the same residues with the same steps are one product. */
function domains(orbit: Orbit): { indices: number[]; residues: Offset[]; steps: Steps }[] {
  const byClass = new Map<string, { index: number; residues: Offset[]; steps: Steps }>();
  for (const m of [...orbit.members].sort((a, b) => compareOffsets(a.offset, b.offset) || a.index - b.index)) {
    // what stands still is named one by one
    const still = m.steps.every((s) => s === 0) ? m.offset.join(',') : '';
    const key = `${String(m.index)}/${m.steps.join(',')}/${still}`;
    const own = byClass.get(key) ?? { index: m.index, residues: [], steps: m.steps };
    byClass.set(key, own);
    own.residues.push(residueOf(m.offset, m.steps));
  }
  const out = new Map<string, { indices: number[]; residues: Offset[]; steps: Steps }>();
  for (const { index, residues, steps } of byClass.values()) {
    const key = `${steps.join(',')}|${residues.map((r) => r.join(',')).join(' ')}`;
    const own = out.get(key) ?? { indices: [], residues, steps };
    out.set(key, own);
    own.indices.push(index);
  }
  return [...out.values()];
}

function orbitTex(orbit: Orbit, context: TypesetContext, style: Style): string {
  const letter = letters[orbit.kind];
  const factor = pauliTex(orbit.species, orbit.pauli, letter, style);
  const named = winding(orbit, context);
  if (named) return `\\prod_{${letter}\\in ${named.tex}}${factor}`;
  const all = context.species.get(orbit.species)?.classes.length ?? context.family[orbit.kind].length;
  return domains(orbit)
    .map(({ indices, residues, steps }) => {
      const [first = []] = residues;
      if (steps.every((m) => m === 0))
        return indices
          .map((index) => {
            const label = classLabel(context.family, orbit.kind, index);
            return pauliTex(
              orbit.species,
              orbit.pauli,
              label === '' ? placeTex(first) : `${placeTex(first)},${labelTex(label)}`,
              style,
            );
          })
          .join(' ');
      const extra = conditionsTex(letter, steps, residues);
      return `\\prod_{${letter}${classesTex(context, orbit.kind, indices, all)}${extra === '' ? '' : `:\\,${extra}`}}${factor}`;
    })
    .join(' ');
}

function partTex(p: ProductPart, context: TypesetContext, style: Style): string {
  const sign = signs[p.string.phase];
  if (p.string.factors.length === 0)
    return `\\left(${p.string.phase === 0 ? '1' : p.string.phase === 2 ? '-1' : sign.replace('\\,', '')}\\right)^{N}`;
  const { shape } = placed(p.string, p.steps, context);
  const letter = shape.anchor === 'cell' ? 'r' : letters[shape.anchor];
  const body = shapeTex(shape, style, { species: context.species.keys() });
  return `\\prod_{${letter}}${sign === '' ? body : `\\left(${sign}${body}\\right)`}`;
}

/** A product of unbounded support: `\prod_{v} s^{x}_{v}`, `\prod_{l\in C_{1}} g^{z}_{l}`. */
export function extendedTex(extended: Extended, context: TypesetContext, style: Style): string {
  const { orbits: list, others } = orbits(extended);
  const body = [...list.map((o) => orbitTex(o, context, style)), ...others.map((p) => partTex(p, context, style))].join(
    ' ',
  );
  return `${signs[extended.phase]}${body === '' ? '1' : body}`;
}

/** Its spoken form. */
export function extendedSpoken(extended: Extended, context: TypesetContext): string {
  const { orbits: list, others } = orbits(extended);
  const words = list.map((o) => {
    const named = winding(o, context);
    const name = `${nameSpoken(o.species)} ${o.pauli}`;
    if (named) return `the product of ${name} over ${named.spoken}`;
    const all = context.species.get(o.species)?.classes.length ?? context.family[o.kind].length;
    const over = domains(o).map(({ indices, residues, steps }) => {
      const which = indices.length >= all ? '' : ` of class ${labelsOf(context.family, o.kind, indices).join(' and ')}`;
      const where = conditionsSpoken(steps, residues);
      return `${which === '' && where === '' ? 'all ' : ''}${o.kind}${which}${where}`;
    });
    return `the product of ${name} over ${over.join(', and ')}`;
  });
  const rest = others.map((p) =>
    p.string.factors.length === 0 ? 'a sign for each cell' : 'a product along the lattice',
  );
  const sign = ['', 'i times ', 'minus ', 'minus i times '][extended.phase] ?? '';
  return `${sign}${[...words, ...rest].join(' times ') || '1'}`;
}
