import { Coefficient } from '../algebra/numbers/coefficient.ts';
import { toPhase } from '../algebra/pauli/string.ts';
import type { Factor, LocalString, Operator, Pauli, Steps } from '../algebra/pauli/types.ts';
import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import type { DictionaryRule, LawValue, MapDeclaration, MapValue, Values } from '../language/values.ts';
import { limits, newBudget, type Budget } from '../limits.ts';
import type { Cell, Lattice, Size } from '../lattice/cells.ts';
import { offeredFluxes } from '../maps/gauging.ts';
import { independentStabilizers, isometryOf } from '../maps/states/isometry.ts';
import { keptCommutation } from '../maps/dictionary/commutation.ts';
import type { Finding } from './audit.ts';
import { dictionaryFindings } from './map-dictionary.ts';
import { openFinding } from './numeric.ts';
import { commutePieces, operatorPieces, piecesOf, sizesWords } from './pieces.ts';

type Declared<K extends MapDeclaration['kind']> = Extract<MapDeclaration, { kind: K }>;

/** What is claimed of maps that are no dictionaries. Their generators and the images of these are held to the same tests as a dictionary's lines. */

/** Least common steps of several, pinned ones left out. */
function commonPeriod(all: readonly Steps[], dimension: number): number[] {
  const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));
  const lcm = (a: number, b: number): number => (b === 0 ? a : (a / gcd(a, b)) * b);
  return all.reduce<number[]>(
    (period, steps) => period.map((m, d) => lcm(m, steps[d] ?? 0)),
    Array<number>(dimension).fill(1),
  );
}

/** Every offset within a period. */
function offsetsIn(period: readonly number[]): number[][] {
  return period.reduce<number[][]>(
    (heads, m) => heads.flatMap((head) => Array.from({ length: m }, (_, k) => [...head, k])),
    [[]],
  );
}

/** The image of one string at its place as a signed string; undefined where it is no single Pauli string. */
function imageString(value: MapValue, string: LocalString, budget: Budget): LocalString | string {
  const steps = (string.factors[0]?.cell.offset ?? []).map(() => 0);
  const image = value.map.image(
    { families: [{ coefficient: Coefficient.one, string, steps, needs: [] }], extended: [] },
    budget,
  );
  if (!image.ok) return image.refusal.reason;
  const [family, ...more] = image.value.families;
  if (!family || more.length > 0 || image.value.extended.length > 0) return 'its image is a sum, no Pauli string';
  const { coefficient, string: own } = family;
  const phase = [Coefficient.one, Coefficient.i, Coefficient.one.neg(), Coefficient.i.neg()].findIndex((c) =>
    c.equals(coefficient),
  );
  return phase < 0 ? 'its image is no Pauli string' : { phase: toPhase(own.phase + phase), factors: own.factors };
}

/** Generators with their images as the lines of a dictionary; a sentence where one has no image. */
function generated(value: MapValue, generators: readonly LocalString[], steps: Steps): DictionaryRule[] | string {
  const budget = newBudget(limits.operations, 'operations of the images of generators');
  const rules: DictionaryRule[] = [];
  for (const [rule, left] of generators.entries()) {
    const right = imageString(value, left, budget);
    if (typeof right === 'string') return right;
    rules.push({
      left,
      right,
      steps,
      needs: [],
      anchor: undefined,
      place: value.place,
      rule,
      text: { left: '', right: '' },
    });
  }
  return rules;
}

const single = (species: string, cell: Cell, pauli: Pauli): LocalString => ({
  phase: 0,
  factors: [{ species, cell, pauli }],
});

/** X and Z of every spin of the species, one for each class and residue. */
function singleSpins(names: readonly string[], values: Values, period: readonly number[]): LocalString[] {
  return names.flatMap((name) => {
    const value = values.find(name);
    if (value?.what !== 'spins') return [];
    return value.classes.flatMap((index) =>
      offsetsIn(period).flatMap((offset) => {
        const cell: Cell = { kind: value.kind, index, offset };
        return [single(name, cell, 'x'), single(name, cell, 'z')];
      }),
    );
  });
}

/** A Clifford circuit: X and Z of every spin keep their commutation, and nothing else relates them, so it is an automorphism. */
export function circuitFindings(value: MapValue, declaration: Declared<'circuit'>, values: Values): Finding[] {
  const { lattice } = values;
  if (!lattice) return [];
  const period = commonPeriod(
    declaration.layers.flatMap((layer) => layer.gates.map((gate) => gate.steps)),
    lattice.family.dimension,
  );
  const rules = generated(value, singleSpins(value.map.to, values, period), period);
  if (typeof rules === 'string') return [openFinding(value.name, rules)];
  const kept = keptCommutation(rules, newBudget());
  const figures = {
    commutation: kept.kept === true,
    relations: 0,
    signs: kept.kept === true,
    generators: rules.length,
    layers: declaration.layers.length,
  };
  if (kept.kept !== true)
    return [
      openFinding(`${value.name} is an automorphism`, 'the images of single spins do not keep commutation', figures),
    ];
  return [
    {
      evidence: { kind: 'all sizes', proof: kept.evidence },
      statement: `${value.name} is an automorphism of the spin algebra, on ${sizesWords(kept.evidence)}: the images of X and Z of every spin commute as X and Z do, and have no further relations`,
      figures,
      cautions: smallGateCautions(declaration, lattice),
      sources: ['Clifford circuits on Pauli strings: D. Gottesman, arXiv:quant-ph/9807006 (1998), section 5.'],
    },
  ];
}

/** Sizes on which the targets of one gate fall on one spin, where the circuit as written is none. */
function smallGateCautions(declaration: Declared<'circuit'>, lattice: Lattice): string[] {
  const reach = declaration.layers.flatMap((layer) =>
    layer.gates.flatMap(({ targets }) =>
      targets.flatMap((a, i) =>
        targets
          .slice(i + 1)
          .flatMap((b) =>
            a.species === b.species && a.cell.kind === b.cell.kind && a.cell.index === b.cell.index
              ? [Math.max(...a.cell.offset.map((c, d) => Math.abs(c - (b.cell.offset[d] ?? 0))))]
              : [],
          ),
      ),
    ),
  );
  const largest = Math.max(0, ...reach);
  return largest > 0 && lattice.periodic.some((p) => p)
    ? [
        `On a torus of extent up to ${String(largest)} both targets of a gate may be one spin; the circuit as written is then none.`,
      ]
    : [];
}

/** The law of a gauging map. */
const gaussOf = (value: MapValue): LawValue | undefined => value.map.laws.get('gauss');

/** Neutral strings that generate all neutral ones of the matter: P(v), and charges moved along each link. */
function neutralStrings(declaration: Declared<'gauge'>, lattice: Lattice, period: readonly number[]): LocalString[] {
  const onSite = declaration.symmetry.extended.parts.flatMap((part) =>
    part.string.factors.map((factor) => ({ factor, steps: part.steps })),
  );
  const at = (cell: Cell): Factor | undefined => {
    const own = onSite.find(
      ({ factor, steps }) =>
        factor.cell.kind === cell.kind &&
        factor.cell.index === cell.index &&
        cell.offset.every((c, d) =>
          steps[d] ? (c - (factor.cell.offset[d] ?? 0)) % steps[d] === 0 : c === factor.cell.offset[d],
        ),
    );
    return own && { species: own.factor.species, cell, pauli: own.factor.pauli };
  };
  const charged = (factor: Factor): Factor => ({ ...factor, pauli: factor.pauli === 'z' ? 'x' : 'z' });
  const everywhere = offsetsIn(period);
  const vertices = lattice.family.vertices.flatMap((_, index) =>
    everywhere.flatMap((offset): LocalString[] => {
      const factor = at({ kind: 'vertices', index, offset });
      return factor ? [{ phase: 0, factors: [factor] }] : [];
    }),
  );
  const links = lattice.family.links.flatMap((link, index) =>
    declaration.gauge.classes.includes(index)
      ? everywhere.flatMap((offset): LocalString[] => {
          const ends = [link.a, link.b].map((end) =>
            at({ ...end, offset: end.offset.map((c, d) => c + (offset[d] ?? 0)) }),
          );
          const [a, b] = ends;
          return a && b ? [multiplied(charged(a), charged(b))] : [];
        })
      : [],
  );
  return [...vertices, ...links];
}

const multiplied = (a: Factor, b: Factor): LocalString => ({
  phase: 0,
  factors: [a, b].sort(
    (p, q) => p.cell.index - q.cell.index || p.cell.offset.reduce((sum, c, d) => sum || c - (q.cell.offset[d] ?? 0), 0),
  ),
});

/** Minimal coupling: images commute with the Gauss law; neutral generators keep commutation and, where the field is flat, their relations. */
export function gaugeFindings(
  value: MapValue,
  declaration: Declared<'gauge'>,
  values: Values,
  sizes: readonly Size[],
): Finding[] {
  const { lattice } = values;
  const gauss = gaussOf(value);
  if (!lattice || !gauss) return [];
  const period = commonPeriod(
    declaration.symmetry.extended.parts.map((part) => part.steps),
    lattice.family.dimension,
  );
  const rules = generated(value, neutralStrings(declaration, lattice, period), period);
  if (typeof rules === 'string') return [openFinding(value.name, rules)];
  const from = [
    ...new Set(
      declaration.symmetry.extended.parts.flatMap((part) => part.string.factors.map((factor) => factor.species)),
    ),
  ];
  const to = [...from, declaration.gauge.name];
  const own = dictionaryFindings(value, { kind: 'dictionary', from, to, rules }, values, sizes);
  const fluxes = offeredFluxes(declaration, { family: lattice.family });
  const proofs = gaussProofs(rules, gauss, period);
  const law: Finding = proofs
    ? {
        evidence: { kind: 'all sizes', proof: proofs },
        statement: `every image under ${value.name} commutes with its Gauss law ${gauss.name}, on ${sizesWords(proofs)}; the product of all ${gauss.name} is ${declaration.symmetry.name}, which is +1 in the gauged model`,
        figures: { commutation: true, relations: 0, signs: true, offered: fluxes },
        cautions: [
          'A charged total is excluded: with the Gauss law +1 at every vertex, the global symmetry is +1.',
          ...(fluxes.length > 0
            ? [
                `Terms that may be added without breaking the law: ${fluxes.join(', ')} and sum(l: links) ${declaration.gauge.name}^x[l].`,
              ]
            : []),
        ],
        sources: [
          'Minimal coupling and Gauss law: F. Wegner, J. Math. Phys. 12, 2259 (1971); J. Kogut, Rev. Mod. Phys. 51, 659 (1979).',
        ],
      }
    : openFinding(`images under ${value.name} and ${gauss.name}`, 'an image does not commute with the Gauss law');
  return [law, ...own];
}

/** Proofs that all images commute with the law; undefined where one does not. */
function gaussProofs(rules: readonly DictionaryRule[], gauss: LawValue, steps: Steps): AllSizes[] | undefined {
  const budget = newBudget();
  const proofs: AllSizes[] = [];
  for (const { right } of rules) {
    if ('parts' in right) return undefined;
    const operator: Operator = {
      families: [{ coefficient: Coefficient.one, string: right, steps, needs: [] }],
      extended: [],
    };
    for (const term of operatorPieces('image', operator))
      for (const law of piecesOf(gauss) ?? []) {
        const verdict = commutePieces(term, law, budget);
        if (verdict.commutes !== true) return undefined;
        proofs.push(verdict.evidence);
      }
  }
  return proofs;
}

/** Unitary gauge: each law holds its own copy of the spin, so fixing these keeps all products of operators that commute with the law. */
export function solveFindings(value: MapValue, declaration: Declared<'solve'>): Finding[] {
  const { law, species } = declaration;
  const budget = newBudget();
  const pieces = piecesOf(law) ?? [];
  const proofs: AllSizes[] = [];
  for (const [k, a] of pieces.entries())
    for (const b of pieces.slice(k)) {
      const verdict = commutePieces(a, b, budget);
      if (verdict.commutes === true) proofs.push(verdict.evidence);
    }
  return [
    {
      evidence: { kind: 'all sizes', proof: proofs },
      statement: `${value.name}: every ${law.name} holds its own ${species.name} and they commute with one another, on ${sizesWords(proofs)}; on operators that commute with ${law.name} removing ${species.name} keeps products and spectra`,
      figures: { commutation: true, relations: 0, signs: true },
      cautions: [
        `Holds in the sector ${law.name} = ${law.value === 1 ? '+1' : '-1'}; other sectors have images of their own.`,
      ],
      sources: ['Unitary gauge: E. Fradkin, S. Shenker, Phys. Rev. D 19, 3682 (1979).'],
    },
  ];
}

/** Models that are images under this map, and what of them leaves the allowed states. */
function leakage(value: MapValue, values: Values): string[] {
  const budget = newBudget();
  return [...values.all.values()].flatMap((other) => {
    if (other.what !== 'model' || other.image?.map !== value.name) return [];
    const origin = values.find(other.image.of);
    return origin?.what === 'model'
      ? value.map.cautions(origin.operator, budget).map((words) => `${origin.name}: ${words}`)
      : [];
  });
}

/** A state map: orthonormal images, dimensions, stabilizers of the image, and what the models it was applied to lose. */
export function stateFindings(value: MapValue, declaration: Declared<'states'>, values: Values): Finding[] {
  const iso = isometryOf(declaration);
  const { listed, forbidden, overlaps, imageDimension } = iso;
  const stabilizers = independentStabilizers(iso).map(({ letters, sign }) => `${sign === 1 ? '+' : '-'}${letters}`);
  const figures = {
    isometry: overlaps.length === 0,
    sourceDimension: listed.length,
    imageDimension,
    forbidden,
    stabilizers,
    blocks: declaration.blocks.length,
  };
  const [first] = overlaps;
  if (first) {
    const what =
      first.first === first.second
        ? `the image of |${first.first}> has norm squared ${first.product.toText()}`
        : `the images of |${first.first}> and |${first.second}> have inner product ${first.product.toText()}`;
    return [
      {
        evidence: { kind: 'counterexample' },
        statement: `${value.name} is no isometry: ${what}`,
        figures,
        witness: { first: first.first, second: first.second, product: first.product.toText(), words: what },
        cautions: leakage(value, values),
      },
    ];
  }
  const image =
    stabilizers.length === 0
      ? 'no Pauli string is fixed on the image'
      : `the image is fixed by ${stabilizers.join(', ')} (letters in the order of the listed spins)`;
  return [
    {
      evidence: { kind: 'exact on', sizes: ['every block'] },
      statement: `${value.name} maps ${String(listed.length)} states of a block to orthonormal images; ${image}`,
      figures,
      cautions: [
        ...(forbidden.length > 0
          ? [
              `Forbidden in a block: ${forbidden.map((bits) => `|${bits}>`).join(', ')}. Operators are projected onto the listed states, so with leakage the map is no homomorphism.`,
            ]
          : []),
        ...leakage(value, values),
      ],
      sources: ['Exact arithmetic on the block: V†V = 1 on the listed states.'],
    },
  ];
}
