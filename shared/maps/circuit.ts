import { conjugate, gateNamed, gatesCommute, type Gate } from '../algebra/pauli/clifford.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import { collect } from '../algebra/pauli/family.ts';
import { adjointString, classKey, siteKey, translateString } from '../algebra/pauli/string.ts';
import type {
  Extended,
  Factor,
  Family,
  LocalString,
  Operator,
  ProductPart,
  Site,
  Steps,
} from '../algebra/pauli/types.ts';
import { shifted, type Cell, type Offset } from '../lattice/cells.ts';
import type { Budget } from '../limits.ts';
import type { CircuitLayer, MapDeclaration, OperatorMap, Outcome } from '../language/values.ts';
import type { Context } from './context.ts';
import { allowed, MapRefused, refused } from './refusals.ts';
import { gcd, inSteps, minus, refined, residues } from './steps.ts';

export type CircuitDeclaration = Extract<MapDeclaration, { kind: 'circuit' }>;

/** A gate with all its translates. */
interface Placed {
  readonly gate: Gate;
  readonly targets: readonly Site[];
  readonly steps: Steps;
}

const moved = (targets: readonly Site[], by: Offset): Site[] =>
  targets.map((t) => ({ ...t, cell: shifted(t.cell, by) }));

function placedGates(layer: CircuitLayer): Placed[] {
  const gate = gateNamed(layer.gate);
  if (!gate) throw new MapRefused(`there is no gate ${layer.gate}`);
  return layer.gates.map(({ targets, steps }) => {
    if (targets.length !== gate.arity)
      throw new MapRefused(`gate ${gate.name} acts on ${String(gate.arity)} spins, got ${String(targets.length)}`);
    if (new Set(targets.map(siteKey)).size !== targets.length)
      throw new MapRefused(`gate ${gate.name} needs ${String(gate.arity)} distinct spins`);
    return { gate, targets, steps };
  });
}

/** Translates of a placed gate that hold a spin of the string; each once. */
function touching(g: Placed, string: LocalString): Offset[] {
  const found = new Map<string, Offset>();
  for (const f of string.factors)
    for (const t of g.targets) {
      if (classKey(f) !== classKey(t)) continue;
      const by = minus(f.cell.offset, t.cell.offset);
      if (inSteps(by, g.steps)) found.set(by.join(','), by);
    }
  return [...found.values()];
}

/** Two gates of one layer that do not commute: then their order would matter, and a line gives none. */
function clash(layer: readonly Placed[], budget: Budget): readonly [Placed, Placed] | undefined {
  for (const [i, a] of layer.entries())
    for (const b of layer.slice(i)) {
      const steps = a.steps.map((m, d) => gcd(m, b.steps[d] ?? 0));
      for (const s of a.targets)
        for (const t of b.targets) {
          budget.spend(8);
          if (classKey(s) !== classKey(t)) continue;
          const by = minus(s.cell.offset, t.cell.offset);
          if (inSteps(by, steps) && !gatesCommute(a, { gate: b.gate, targets: moved(b.targets, by) })) return [a, b];
        }
    }
  return undefined;
}

/** True if the gate moves along wherever the family does; else it meets only some of its translates. */
const follows = (gate: Steps, family: Steps): boolean => family.every((m, d) => m === 0 || (gate[d] ?? 0) > 0);

/** Factors that a gate brings to a new spin fall away with the gate where an open edge cuts it. */
function marked(before: LocalString, after: LocalString, open: boolean): LocalString {
  if (!open) return after;
  const old = new Map(before.factors.map((f) => [siteKey(f), f]));
  return {
    phase: after.phase,
    factors: after.factors.map(({ species, cell, pauli }): Factor => {
      const own = old.get(siteKey({ species, cell }));
      return own && !own.optional ? { species, cell, pauli } : { species, cell, pauli, optional: true };
    }),
  };
}

/**
 * Image of a string under one layer. Gates of a layer commute, so only those that hold a spin of the string itself act, each once.
 * U_1 … U_n O U_n† … U_1† with the untouched gates cancelling.
 */
function conjugated(string: LocalString, gates: readonly Placed[], open: boolean, budget: Budget): LocalString {
  let out = string;
  for (const g of gates)
    for (const by of touching(g, string)) {
      budget.spend(4 + out.factors.length);
      out = conjugate(g.gate, moved(g.targets, by), out);
    }
  return marked(string, out, open);
}

/** Cells that a term demands although the gate has taken its factor away. */
const lost = (before: LocalString, after: LocalString): Cell[] => {
  const kept = new Set(after.factors.map(siteKey));
  return before.factors.filter((f) => !f.optional && !kept.has(siteKey(f))).map((f) => f.cell);
};

/** Translations, along the directions where fixed gates stand still, that may bring a string under one of them. */
function meetings(
  string: LocalString,
  steps: Steps,
  fixed: readonly Placed[],
  directions: readonly number[],
): Offset[] {
  const found = new Map<string, Offset>();
  for (const g of fixed)
    for (const t of g.targets)
      for (const f of string.factors) {
        if (classKey(f) !== classKey(t)) continue;
        const by = minus(t.cell.offset, f.cell.offset).map((c, d) => (directions.includes(d) ? c : 0));
        if (inSteps(by, steps)) found.set(by.join(','), by);
      }
  return [...found.values()];
}

type Piece = Pick<Family, 'string' | 'steps' | 'needs'>;
interface Change {
  readonly piece: Piece;
  readonly sign: 1 | -1;
}

/** Image of all translates of a string under a layer: what the moving gates make of it, corrected where gates stand still. */
function layerImage(piece: Piece, gates: readonly Placed[], open: boolean, budget: Budget): Outcome<Change[]> {
  const out: Change[] = [];
  const steps = refined(
    piece.steps,
    gates.map((g) => g.steps),
  );
  const moving = gates.filter((g) => follows(g.steps, steps));
  const fixed = gates.filter((g) => !follows(g.steps, steps));
  for (const by of residues(piece.steps, steps)) {
    const string = translateString(piece.string, by);
    const needs = piece.needs.map((c) => shifted(c, by));
    const image = conjugated(string, moving, open, budget);
    out.push({ piece: { string: image, steps, needs: [...needs, ...(open ? lost(string, image) : [])] }, sign: 1 });
    if (fixed.length === 0) continue;
    const patterns = new Map(
      fixed
        .map((g) => steps.flatMap((m, d) => (m > 0 && (g.steps[d] ?? 0) === 0 ? [d] : [])))
        .map((d) => [d.join(','), d]),
    );
    const [directions] = patterns.values();
    if (patterns.size > 1 || !directions)
      return refused(
        'gates that stand still along different directions meet one translated term; write them as circuits of their own',
        string,
      );
    for (const at of meetings(string, steps, fixed, directions)) {
      const here = translateString(string, at);
      const still = steps.map((m, d) => (directions.includes(d) ? 0 : m));
      const bulk = translateString(image, at);
      const whole = layerImage(
        { string: here, steps: still, needs: needs.map((c) => shifted(c, at)) },
        gates,
        open,
        budget,
      );
      if (!whole.ok) return whole;
      out.push(
        { piece: { string: bulk, steps: still, needs: needs.map((c) => shifted(c, at)) }, sign: -1 },
        ...whole.value,
      );
    }
  }
  return allowed(out);
}

/**
 * A Clifford circuit as a map: lines act in the order written, N(O) = U O U† with U = last line … first line. Exact on Pauli strings
 * (D. Gottesman, arXiv:quant-ph/9807006, section 5), an automorphism at every size.
 */
export function circuitMap(declaration: CircuitDeclaration, context: Context, budget: Budget): OperatorMap {
  const { open } = context;
  const layers = declaration.layers.map(placedGates);
  for (const [k, layer] of layers.entries()) {
    const pair = clash(layer, budget);
    if (pair)
      throw new MapRefused(
        `gates of line ${String(k + 1)} do not commute: two ${pair[0].gate.name} that share a spin; give each its own line`,
      );
  }

  const operatorImage = (operator: Operator, gates: readonly Placed[], spend: Budget): Outcome<Operator> => {
    const families: Family[] = [];
    for (const f of operator.families) {
      if (f.string.factors.length === 0) {
        families.push(f);
        continue;
      }
      const image = layerImage(f, gates, open, spend);
      if (!image.ok) return image;
      families.push(
        ...image.value.map(({ piece, sign }): Family => ({
          ...piece,
          coefficient: sign === 1 ? f.coefficient : f.coefficient.neg(),
        })),
      );
    }
    const extended: Operator['extended'][number][] = [];
    for (const t of operator.extended) {
      const image = extendedLayer(t.extended, gates, open, spend);
      if (!image.ok) return image;
      extended.push({ coefficient: t.coefficient, extended: image.value });
    }
    return allowed(collect([{ families, extended }], { open, budget: spend }));
  };

  const run = <T>(start: T, step: (value: T, gates: readonly Placed[]) => Outcome<T>): Outcome<T> => {
    let value = start;
    for (const gates of layers) {
      const next = step(value, gates);
      if (!next.ok) return next;
      value = next.value;
    }
    return allowed(value);
  };

  const species = [...new Set(layers.flatMap((l) => l.flatMap((g) => g.targets.map((t) => t.species))))];
  const cut = open && layers.some((l) => l.some((g) => g.gate.name === 'swap'));
  return {
    kind: 'circuit',
    from: [],
    to: species,
    image: (operator, spend) =>
      run(collect([operator], { open, budget: spend }), (o, gates) => operatorImage(o, gates, spend)),
    imageExtended: (extended, spend) => run(extended, (e, gates) => extendedLayer(e, gates, open, spend)),
    laws: new Map(),
    cautions: () =>
      cut ? ['where an open edge cuts a swap, its spin stays in place; terms there are shown as in the bulk'] : [],
  };
}

function extendedLayer(extended: Extended, gates: readonly Placed[], open: boolean, budget: Budget): Outcome<Extended> {
  const parts: ProductPart[] = [];
  for (const p of extended.parts) {
    const image = layerImage(p, gates, open, budget);
    if (!image.ok) return refused(image.refusal.reason, extended);
    parts.push(
      ...image.value.map(({ piece, sign }) => (sign === 1 ? piece : { ...piece, string: adjointString(piece.string) })),
    );
  }
  return allowed(canonicalExtended({ phase: extended.phase, parts }, { open, budget }));
}

/** The circuit that undoes a circuit: inverse gates, last line first. */
export const inverseCircuit = (declaration: CircuitDeclaration): CircuitDeclaration => ({
  kind: 'circuit',
  layers: [...declaration.layers]
    .reverse()
    .map((layer) => ({ ...layer, gate: gateNamed(layer.gate)?.inverse ?? layer.gate })),
});
