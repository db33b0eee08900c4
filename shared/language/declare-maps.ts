import type {
  Expression,
  KetNode,
  MapExpression,
  Path,
  Rule,
  Span,
  SpinPlace,
  Statement,
  Word,
} from '../../grammar/syntax.ts';

import { gateNamed, gates as gateTable } from '../algebra/pauli/clifford.ts';
import type { Coefficient } from '../algebra/numbers/coefficient.ts';
import { canonicalExtended } from '../algebra/pauli/extended.ts';
import { siteKey } from '../algebra/pauli/string.ts';
import type { Extended, LocalString, Site, Steps } from '../algebra/pauli/types.ts';
import { options } from './arithmetic.ts';
import { instances } from './binding.ts';
import { dotted, isOnSite } from './calls.ts';
import { asSymmetry, operatorOf, signedProduct } from './declare-operators.ts';
import { amount } from './expand.ts';
import { siteOf } from './spins.ts';
import { fail, say, whatIsIt } from './problem.ts';
import { textOf, type Scene } from './scene.ts';
import type {
  CircuitLayer,
  DictionaryRule,
  LawValue,
  MapDeclaration,
  MapValue,
  Place,
  SpeciesValue,
  StateBlock,
  StateRule,
  SymmetryValue,
  Value,
} from './values.ts';

type Of<T extends Statement['type']> = Statement & { readonly type: T };
type PlaceOf = (node: Span) => Place;
type MapStatement = Of<'dictionary' | 'gauge' | 'circuit' | 'solve' | 'states' | 'composition'>;

const zeros = (scene: Scene): Steps => new Array<number>(scene.dimension).fill(0);

/** A declared name that must be of one kind. */
function named<W extends Value['what']>(path: Path, what: W, scene: Scene): Value & { what: W } {
  const value = scene.values.find(dotted(path));
  if (value?.what === what) return value as Value & { what: W };
  return fail(
    value
      ? say.wrongKind(`${whatIsIt[value.what] ?? value.what} "${dotted(path)}"`, whatIsIt[what] ?? what)
      : say.unknownName(dotted(path), undefined),
    path,
  );
}
const asPath = (word: Word): Path => ({ words: [word], start: word.start, end: word.end });
const species = (word: Word, scene: Scene): SpeciesValue => named(asPath(word), 'spins', scene);

function distinctSpecies(words: readonly Word[], scene: Scene): string[] {
  const seen = new Set<string>();
  for (const word of words) {
    species(word, scene);
    if (seen.has(word.text)) fail(say.twoSpecies(word.text), word);
    seen.add(word.text);
  }
  return [...seen];
}

/** Fails where a string acts on species that its side does not have. */
function demandSpecies(used: Iterable<string>, allowed: readonly string[], side: string, place: Span): void {
  for (const name of used) if (!allowed.includes(name)) fail(say.mapSpecies(name, side), place);
}

const speciesIn = (side: LocalString | Extended): string[] =>
  'factors' in side
    ? side.factors.map((f) => f.species)
    : side.parts.flatMap((p) => p.string.factors.map((f) => f.species));

/** One side of a dictionary line. */
function sideOf(
  node: Expression,
  side: string,
  allowed: readonly string[],
  global: boolean,
  scene: Scene,
): LocalString | Extended {
  const operator = operatorOf(node, scene);
  const local = signedProduct(operator);
  const extended = global && !local ? asSymmetry(operator) : undefined;
  const found = local ?? (extended && canonicalExtended(extended, options(scene)));
  if (!found || (local && local.phase % 2 === 1)) return fail(say.mapSide(side), node);
  demandSpecies(speciesIn(found), allowed, side, node);
  return found;
}

function dictionaryRules(
  rule: Rule & { type: 'dictionary' },
  number: number,
  from: readonly string[],
  to: readonly string[],
  scene: Scene,
  placeOf: PlaceOf,
): DictionaryRule[] {
  const global = rule.binders.length === 0;
  const text = { left: textOf(rule.left, scene), right: textOf(rule.right, scene) };
  return instances(rule.binders, 'sum', scene, (inner) => ({
    left: sideOf(rule.left, 'left', from, global, inner),
    right: sideOf(rule.right, 'right', to, global, inner),
  })).map(({ value, steps, needs, anchor }) => ({
    ...value,
    steps: steps ?? zeros(scene),
    needs,
    anchor: global ? undefined : anchor,
    place: placeOf(rule),
    rule: number,
    text,
  }));
}

function dictionary(node: Of<'dictionary'>, scene: Scene, placeOf: PlaceOf): MapDeclaration {
  const from = distinctSpecies(node.from, scene);
  const to = distinctSpecies(node.to, scene);
  for (const word of node.to) if (from.includes(word.text)) fail(say.mapShared(word.text), word);
  const rules = node.rules.flatMap((rule, k) =>
    rule.type === 'dictionary' ? dictionaryRules(rule, k, from, to, scene, placeOf) : [],
  );
  return { kind: 'dictionary', from, to, rules };
}

const siteAt = (place: SpinPlace, scene: Scene): Site => ({
  species: place.species.text,
  cell: siteOf(place.species, place.cell, scene).cell,
});

function circuitLayer(rule: Rule & { type: 'gate' }, scene: Scene, placeOf: PlaceOf): CircuitLayer {
  const { text } = rule.gate;
  const arity = gateNamed(text)?.arity;
  if (arity === undefined)
    return fail(
      say.gate(
        text,
        gateTable.map((g) => g.name),
      ),
      rule.gate,
    );
  if (arity !== rule.targets.length) return fail(say.gateTargets(text, arity, rule.targets.length), rule);
  const gates = instances(rule.binders, 'sum', scene, (inner) => {
    const targets = rule.targets.map((place) => siteAt(place, inner));
    if (new Set(targets.map(siteKey)).size < targets.length) fail(say.gateSame(text), rule);
    return targets;
  }).map(({ value, steps, needs }) => ({ targets: value, steps: steps ?? zeros(scene), needs }));
  return { gate: text, gates, place: placeOf(rule) };
}

// ------------------------------------------------------------------ state maps

function stateRule(bits: KetNode, image: Expression, from: number, to: number, scene: Scene, place: Place): StateRule {
  if (bits.bits.length !== from) fail(say.stateBits(bits.bits.length, from), bits);
  const state = amount(image, { ...scene, constants: true });
  if (state.what !== 'kets') return fail(say.stateImage(), image);
  const amplitudes = new Map<string, Coefficient>();
  for (const [key, c] of state.amplitudes) {
    if (key.length !== to) fail(say.stateBits(key.length, to), image);
    amplitudes.set(key, c);
  }
  return { bits: bits.bits, amplitudes, place };
}

/** Whether a block meets another one, or one of its own translates. */
function overlap(blocks: readonly { readonly sites: readonly Site[]; readonly steps: Steps }[]): boolean {
  const placed = blocks.flatMap((block, k) => block.sites.map((site) => ({ site, steps: block.steps, block: k })));
  return placed.some((a, i) =>
    placed.slice(i + 1).some((b) => {
      if (
        a.site.species !== b.site.species ||
        a.site.cell.kind !== b.site.cell.kind ||
        a.site.cell.index !== b.site.cell.index
      )
        return false;
      const gap = a.site.cell.offset.map((c, d) => c - (b.site.cell.offset[d] ?? 0));
      // two blocks of different steps meet if the gap is a combination of both; here the coarser pattern decides
      return gap.every((g, d) => {
        const step = gcd(a.steps[d] ?? 0, b.steps[d] ?? 0);
        return step === 0 ? g === 0 : g % step === 0;
      });
    }),
  );
}
const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));

function states(node: Of<'states'>, scene: Scene, placeOf: PlaceOf): MapDeclaration {
  const blocks = instances([node.binder], 'sum', scene, (inner) => ({
    from: node.from.map((place) => siteAt(place, inner)),
    to: node.to.map((place) => siteAt(place, inner)),
  })).flatMap(({ value, steps, anchor }): StateBlock[] =>
    anchor ? [{ ...value, steps: steps ?? zeros(scene), anchor }] : [],
  );
  for (const [side, places] of [
    ['source', node.from],
    ['target', node.to],
  ] as const) {
    const sites = blocks.map((b) => ({ sites: side === 'source' ? b.from : b.to, steps: b.steps }));
    const [first, last] = [places[0], places.at(-1)];
    if (overlap(sites)) fail(say.blockOverlap(side), { start: first?.start ?? node.start, end: last?.end ?? node.end });
  }
  const from = [...new Set(node.from.map((p) => p.species.text))];
  const to = [...new Set(node.to.map((p) => p.species.text))];
  for (const place of node.to)
    if (from.includes(place.species.text)) fail(say.mapShared(place.species.text), place.species);
  const seen = new Set<string>();
  const rules = node.rules.map((rule) => {
    if (seen.has(rule.bits.bits)) fail(say.stateTwice(rule.bits.bits), rule.bits);
    seen.add(rule.bits.bits);
    return stateRule(rule.bits, rule.image, node.from.length, node.to.length, scene, placeOf(rule));
  });
  return { kind: 'states', blocks, rules, from, to };
}

// ------------------------------------------------------------------ the others

function gauge(node: Of<'gauge'>, scene: Scene): MapDeclaration {
  const symmetry: SymmetryValue = named(node.symmetry, 'symmetry', scene);
  const field = species(node.gauge, scene);
  const kind = node.cells.words.map((w) => w.text).join('.');
  if (field.kind !== 'links' || kind !== 'links') fail(say.gaugeCells(field.name, field.kind), node.gauge);
  if (!isOnSite(symmetry.extended)) fail(say.onSite(symmetry.name), node.symmetry);
  return { kind: 'gauge', symmetry, gauge: field };
}

function composed(
  map: MapExpression,
  scene: Scene,
  whole: { readonly text: string; readonly place: Place; readonly name: string },
  build: Build,
): MapDeclaration | MapValue {
  if (map.type === 'map') return named(map.path, 'map', scene);
  const value = (part: MapExpression): MapValue => {
    const made = composed(part, scene, whole, build);
    if ('what' in made) return made;
    return { ...whole, name: textOf(part, scene), what: 'map', declaration: made, map: build(made, part) };
  };
  return map.type === 'inverse'
    ? { kind: 'inverse', of: value(map.of) }
    : { kind: 'then', first: value(map.first), second: value(map.second) };
}

/** Builds the map of a declaration; fails at `place` where it cannot be built. */
export type Build = (declaration: MapDeclaration, place: Span) => MapValue['map'];

/** What a map statement declares. */
export function declareMap(
  node: MapStatement,
  heading: { readonly name: string; readonly place: Place; readonly text: string },
  scene: Scene,
  placeOf: PlaceOf,
  build: Build,
): MapValue {
  const declaration = ((): MapDeclaration => {
    switch (node.type) {
      case 'dictionary':
        return dictionary(node, scene, placeOf);
      case 'gauge':
        return gauge(node, scene);
      case 'circuit':
        return {
          kind: 'circuit',
          layers: node.rules.flatMap((rule) => (rule.type === 'gate' ? [circuitLayer(rule, scene, placeOf)] : [])),
        };
      case 'solve': {
        const law: LawValue = named(node.law, 'law', scene);
        return { kind: 'solve', law, species: species(node.species, scene) };
      }
      case 'states':
        return states(node, scene, placeOf);
      case 'composition': {
        const made = composed(node.map, scene, heading, build);
        return 'what' in made ? made.declaration : made;
      }
    }
  })();
  return { ...heading, what: 'map', declaration, map: build(declaration, node) };
}
