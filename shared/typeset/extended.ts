import { compareOffsets } from '../algebra/pauli/string.ts';
import type { Extended, Pauli, ProductPart, Steps } from '../algebra/pauli/types.ts';
import type { CellKind, Offset } from '../lattice/cells.ts';
import { coloopLinks, loopLinks, membraneLinks, type SteppedCell } from '../lattice/windings.ts';
import { labelsOf, letters, type Style, type TypesetContext } from './context.ts';
import { nameSpoken } from './names.ts';
import { placed } from './shapes.ts';
import { pauliTex, shapeTex } from './shape-tex.ts';

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
  `${String(index)}@${offset.map((c, d) => (steps[d] ? ((c % steps[d]) + steps[d]) % steps[d] : c)).join(',')}/${steps.join(',')}`;

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

/** Classes with the same residues and steps are one product. */
function domains(orbit: Orbit): { indices: number[]; offset: Offset; steps: Steps }[] {
  const by = new Map<string, { indices: number[]; offset: Offset; steps: Steps }>();
  for (const m of [...orbit.members].sort((a, b) => compareOffsets(a.offset, b.offset) || a.index - b.index)) {
    const key = memberKey(0, m.offset, m.steps);
    const domain = by.get(key) ?? { indices: [], offset: m.offset, steps: m.steps };
    by.set(key, domain);
    domain.indices.push(m.index);
  }
  return [...by.values()];
}

const labelTex = (label: string): string => (/^[\dA-Z]$/.test(label) ? label : `\\mathrm{${label}}`);

function orbitTex(orbit: Orbit, context: TypesetContext, style: Style): string {
  const letter = letters[orbit.kind];
  const factor = pauliTex(orbit.species, orbit.pauli, letter, style);
  const named = winding(orbit, context);
  if (named) return `\\prod_{${letter}\\in ${named.tex}}${factor}`;
  return domains(orbit)
    .map(({ indices, offset, steps }) => {
      const n = steps.length;
      const all = context.species.get(orbit.species)?.classes.length ?? context.family[orbit.kind].length;
      const labels = labelsOf(context.family, orbit.kind, indices).map(labelTex);
      if (steps.every((m) => m === 0)) {
        const place = n === 1 ? String(offset[0] ?? 0) : `(${offset.join(',')})`;
        return indices
          .map((_, k) =>
            pauliTex(
              orbit.species,
              orbit.pauli,
              context.family[orbit.kind].length === 1 ? place : `${place},${labels[k] ?? ''}`,
              style,
            ),
          )
          .join(' ');
      }
      const range =
        indices.length >= all ? '' : `\\in ${labels.length === 1 ? (labels[0] ?? '') : `\\{${labels.join(',')}\\}`}`;
      const extra = steps.flatMap((m, d) => {
        const name = n === 1 ? letter : `${letter}_{${String(d + 1)}}`;
        return m === 1
          ? []
          : m === 0
            ? [`${name}=${String(offset[d] ?? 0)}`]
            : [`${name}\\equiv ${String(offset[d] ?? 0)}\\,(${String(m)})`];
      });
      return `\\prod_{${letter}${range}${extra.length === 0 ? '' : `:\\,${extra.join(',\\,')}`}}${factor}`;
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
    const whole = o.members.length >= all && o.members.every((m) => m.steps.every((s) => s === 1));
    return `the product of ${name} over ${whole ? `all ${o.kind}` : `${o.kind} of a sublattice or a line`}`;
  });
  const rest = others.map((p) =>
    p.string.factors.length === 0 ? 'a sign for each cell' : 'a product along the lattice',
  );
  const sign = ['', 'i times ', 'minus ', 'minus i times '][extended.phase] ?? '';
  return `${sign}${[...words, ...rest].join(' times ') || '1'}`;
}
