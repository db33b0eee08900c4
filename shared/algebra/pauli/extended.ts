import { newBudget, type Budget } from '../../limits.ts';
import type { Cell, Offset } from '../../lattice/cells.ts';
import {
  canonicalFamily,
  coarsest,
  familyKey,
  lcmOf,
  modulo,
  residueCount,
  residues,
  type CollectOptions,
} from './collect.ts';
import { inGroup, oddShifts, relativeSteps } from './overlaps.ts';
import { adjointString, classKey, multiplyPaulis, toPhase } from './string.ts';
import { Coefficient } from '../numbers/coefficient.ts';
import type { Extended, Factor, LocalString, Pauli, ProductPart, Steps } from './types.ts';

export const identityExtended: Extended = { phase: 0, parts: [] };

/** A string on a few spins as a product of one pinned part. */
export const asExtended = (string: LocalString, needs: readonly Cell[] = []): Extended => ({
  phase: 0,
  parts: [{ string, steps: string.factors[0]?.cell.offset.map(() => 0) ?? needs[0]?.offset.map(() => 0) ?? [], needs }],
});

/**
 * True if the order of the translates, and of the parts, does not matter: every two of them commute on the infinite lattice, pairs of parts in every
 * relative position. Only then is a product without an order defined, sign and all.
 */
export function isOrderFree({ parts }: Extended, budget?: Budget): boolean {
  return parts.every((p, i) =>
    parts.slice(i).every((q) => {
      const steps = relativeSteps(p.steps, q.steps);
      return oddShifts(p.string, q.string, budget).every((shift) => !inGroup(shift, steps));
    }),
  );
}

/** Pauli matrices of one class of spins, where some directions are translated and the others pinned, tabulated over a period. */
interface Layer {
  readonly factor: Factor;
  readonly pattern: string;
  period: Steps;
  table: Map<string, { readonly at: Offset; readonly pauli: Pauli }>;
}

/** Phase for each translate, by steps. */
class Phases {
  readonly bySteps = new Map<string, { steps: Steps; phase: number }>();
  total: number;
  constructor(total: number) {
    this.total = total;
  }
  add(steps: Steps, phase: number): void {
    if (steps.every((m) => m === 0)) this.total += phase;
    else {
      const old = this.bySteps.get(steps.join(','));
      this.bySteps.set(steps.join(','), { steps, phase: (old?.phase ?? 0) + phase });
    }
  }
  parts(): ProductPart[] {
    return [...this.bySteps.entries()]
      .filter(([, { phase }]) => toPhase(phase) !== 0)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([, { steps, phase }]) => ({ string: { phase: toPhase(phase), factors: [] }, steps, needs: [] }));
  }
}

const patternOf = (steps: Steps): string => steps.map((m) => (m === 0 ? '.' : '*')).join('');
const residueOf = (offset: Offset, steps: Steps): number[] =>
  offset.map((c, d) => (steps[d] ? modulo(c, steps[d]) : c));

/**
 * The spins of one part: for each class and residue the product of the Pauli matrices that its translates bring there, and the phase this costs for
 * each translate. Translates are taken in rising order, so a spin meets the factors with falling offset; because all translates commute, any order gives the same.
 */
function spinsOfPart(part: ProductPart, phases: Phases): { factor: Factor; at: Offset; pauli: Pauli }[] {
  const bySpin = new Map<string, { factor: Factor; at: Offset; pauli: Pauli | undefined }>();
  let phase: number = part.string.phase;
  for (const factor of [...part.string.factors].reverse()) {
    const at = residueOf(factor.cell.offset, part.steps);
    const key = `${classKey(factor)}@${at.join(',')}`;
    const old = bySpin.get(key);
    if (old?.pauli) {
      const product = multiplyPaulis(old.pauli, factor.pauli);
      phase += product.phase;
      old.pauli = product.pauli;
    } else bySpin.set(key, { factor, at, pauli: factor.pauli });
  }
  phases.add(part.steps, phase);
  return [...bySpin.values()].flatMap(({ factor, at, pauli }) => (pauli ? [{ factor, at, pauli }] : []));
}

function refine(layer: Layer, period: Steps): void {
  residueCount(period);
  const table: Layer['table'] = new Map();
  for (const { at, pauli } of layer.table.values())
    for (const k of residues(period.map((m, d) => (m === 0 ? 1 : m / (layer.period[d] ?? 1))))) {
      const here = at.map((c, d) => c + (k[d] ?? 0) * (layer.period[d] ?? 0));
      table.set(here.join(','), { at: here, pauli });
    }
  layer.table = table;
  layer.period = period;
}

const onlyPauli = (layer: Layer): Pauli | undefined => {
  const paulis = new Set([...layer.table.values()].map((t) => t.pauli));
  return paulis.size === 1 ? [...paulis][0] : undefined;
};

/** Multiplies the layer by one more orbit of Pauli matrices on its class. */
function multiplyInto(layer: Layer, steps: Steps, at: Offset, pauli: Pauli, phases: Phases, budget: Budget): void {
  const period = layer.period.map((m, d) => lcmOf(m, steps[d] ?? 0));
  if (period.some((m, d) => m !== layer.period[d])) refine(layer, period);
  for (const k of residues(period.map((m, d) => (m === 0 ? 1 : m / (steps[d] ?? 1))))) {
    budget.spend();
    const here = at.map((c, d) => c + (k[d] ?? 0) * (steps[d] ?? 0));
    const key = here.join(',');
    const old = layer.table.get(key);
    if (!old) {
      layer.table.set(key, { at: here, pauli });
      continue;
    }
    const product = multiplyPaulis(old.pauli, pauli);
    phases.add(period, product.phase);
    if (product.pauli) layer.table.set(key, { at: here, pauli: product.pauli });
    else layer.table.delete(key);
  }
}

/** Layers of one class in canonical order, if no two of them can anticommute; else as they came. */
function ordered(layers: readonly Layer[]): readonly Layer[] {
  const paulis = new Set(layers.map(onlyPauli));
  const commute = paulis.size === 1 && !paulis.has(undefined);
  return commute ? [...layers].sort((a, b) => (a.pattern < b.pattern ? -1 : 1)) : layers;
}

function partsOfLayer(layer: Layer): ProductPart[] {
  const byPauli = new Map<Pauli, Map<string, Offset>>();
  for (const [key, { at, pauli }] of layer.table) {
    const set = byPauli.get(pauli) ?? new Map<string, Offset>();
    byPauli.set(pauli, set.set(key, at));
  }
  return [...byPauli.entries()]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .flatMap(([pauli, set]) => {
      const grid = coarsest(set, layer.period);
      return grid.residues
        .map((offset): ProductPart => {
          const { species, cell } = layer.factor;
          return {
            string: { phase: 0, factors: [{ species, cell: { ...cell, offset }, pauli }] },
            steps: grid.steps,
            needs: [],
          };
        })
        .sort((a, b) => (partKey(a) < partKey(b) ? -1 : 1));
    });
}

/** Splits an order-free product into orbits of single Pauli matrices and phases for each translate. */
function split(extended: Extended, budget: Budget): Extended {
  const phases = new Phases(extended.phase);
  const classes = new Map<string, Layer[]>();
  for (const part of extended.parts)
    for (const { factor, at, pauli } of spinsOfPart(part, phases)) {
      const layers = classes.get(classKey(factor)) ?? [];
      classes.set(classKey(factor), layers);
      const pattern = patternOf(part.steps);
      // a layer is reached only past layers that cannot anticommute with what moves
      let reached: Layer | undefined;
      for (let k = layers.length - 1; k >= 0 && !reached; k--) {
        const layer = layers[k];
        if (layer?.pattern === pattern) reached = layer;
        else if (layer && layer.table.size > 0 && onlyPauli(layer) !== pauli) break;
      }
      if (!reached) {
        reached = { factor, pattern, period: part.steps, table: new Map() };
        layers.push(reached);
      }
      multiplyInto(reached, part.steps, at, pauli, phases, budget);
    }
  const kept = [...classes.entries()]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .flatMap(([, layers]) => ordered(layers.filter((l) => l.table.size > 0)).flatMap(partsOfLayer));
  const parts = [...kept, ...phases.parts()];
  return { phase: toPhase(phases.total), parts };
}

const partKey = (part: ProductPart): string =>
  `${String(part.string.phase)}|${familyKey({ coefficient: Coefficient.one, ...part })}`;

/** Key of a canonical extended string. */
export const extendedKey = (extended: Extended): string =>
  `${String(extended.phase)}|${extended.parts.map(partKey).join(';')}`;

/** One part with its representative in the first period; the phase stays inside, it counts once for each translate. */
function canonicalPart(part: ProductPart, open: boolean): ProductPart {
  const { string, steps, needs } = canonicalFamily(
    {
      coefficient: Coefficient.one,
      string: { phase: 0, factors: part.string.factors },
      steps: part.steps,
      needs: part.needs,
    },
    open,
  );
  return {
    string: { phase: part.string.phase, factors: string.factors },
    steps: string.factors.length > 0 ? steps : part.steps,
    needs,
  };
}

/** On open lattices parts stay whole, because what is missing at an edge goes with its part; equal parts cancel where signs cannot arise. */
function cancelOpen(extended: Extended): Extended {
  const parts = extended.parts.map((p) => canonicalPart(p, true));
  const paulis = new Map<string, Pauli>();
  const plain = parts.every(
    (p) =>
      p.string.phase % 2 === 0 &&
      p.string.factors.every((f) => {
        const first = paulis.get(classKey(f)) ?? f.pauli;
        paulis.set(classKey(f), first);
        return first === f.pauli;
      }),
  );
  if (!plain) return { phase: extended.phase, parts };
  const odd = new Map<string, ProductPart>();
  for (const p of parts) if (!odd.delete(partKey(p))) odd.set(partKey(p), p);
  return {
    phase: extended.phase,
    parts: [...odd.entries()].sort(([a], [b]) => (a < b ? -1 : 1)).map(([, p]) => p),
  };
}

/**
 * Canonical form. On tori an order-free product becomes orbits of single Pauli matrices on the coarsest grids, with what phases remain (for each translate, and in all);
 * equal products are then equal as data. A product whose translates anticommute keeps its parts and their order (see `isOrderFree`).
 */
export function canonicalExtended(extended: Extended, { open, budget = newBudget() }: CollectOptions): Extended {
  if (open) return cancelOpen(extended);
  if (!isOrderFree(extended, budget))
    return { phase: extended.phase, parts: extended.parts.map((p) => canonicalPart(p, false)) };
  return split(extended, budget);
}

/** Product a·b in canonical form. */
export const multiplyExtended = (a: Extended, b: Extended, options: CollectOptions): Extended =>
  canonicalExtended({ phase: toPhase(a.phase + b.phase), parts: [...a.parts, ...b.parts] }, options);

/** Hermitian conjugate of an order-free product (parts reversed, phases turned). */
export const adjointExtended = (a: Extended): Extended => ({
  phase: toPhase(-a.phase),
  parts: [...a.parts].reverse().map((p) => ({ ...p, string: adjointString(p.string) })),
});

/** True if it is its own Hermitian conjugate at every size. */
export function isHermitianExtended(a: Extended, options: CollectOptions): boolean {
  if (!isOrderFree(a, options.budget)) return false;
  return extendedKey(canonicalExtended(a, options)) === extendedKey(canonicalExtended(adjointExtended(a), options));
}

/** Species that occur in it. */
export const speciesOfExtended = (a: Extended): ReadonlySet<string> =>
  new Set(a.parts.flatMap((p) => p.string.factors.map((f) => f.species)));
