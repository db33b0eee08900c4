import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { Operator } from '../algebra/pauli/types.ts';
import type { AllSizes } from '../algebra/f2/all-sizes.ts';
import type { DictionaryRule, LawValue, MapValue, Values } from '../language/values.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import { flatChoices } from '../maps/flat-choices.ts';
import type { Lattice, Size } from '../lattice/cells.ts';
import { offeredFluxes } from '../maps/gauging.ts';
import { independentStabilizers, isometryOf } from '../maps/states/isometry.ts';
import { keptCommutation } from '../maps/dictionary/commutation.ts';
import { linesOf, linesOrWhy, type Declared } from './map-generators.ts';
import type { Finding } from './audit.ts';
import { dictionaryFindings } from './map-dictionary.ts';
import { openFinding } from './numeric.ts';
import { commutePieces, operatorPieces, piecesOf, sizesWords } from './pieces.ts';

/** What is claimed of maps that are no dictionaries. Their generators and the images of these are held to the same tests as a dictionary's lines. */

/** A Clifford circuit, or several in a row: X and Z of every spin keep their commutation, and nothing else relates them, so it is an automorphism. */
export function automorphismFindings(
  name: string,
  rules: readonly DictionaryRule[],
  more: Pick<Finding, 'figures' | 'cautions'>,
): Finding[] {
  const kept = keptCommutation(rules, newBudget());
  const figures = {
    commutation: kept.kept === true,
    relations: 0,
    signs: kept.kept === true,
    generators: rules.length,
    ...more.figures,
  };
  if (kept.kept !== true)
    return [openFinding(`${name} is an automorphism`, 'the images of single spins do not keep commutation', figures)];
  return [
    {
      evidence: { kind: 'all sizes', proof: kept.evidence },
      statement: `${name} is an automorphism of the spin algebra, on ${sizesWords(kept.evidence)}: the images of X and Z of every spin commute as X and Z do, and have no further relations`,
      figures,
      cautions: more.cautions ?? [],
      sources: ['Clifford circuits on Pauli strings: D. Gottesman, arXiv:quant-ph/9807006 (1998), section 5.'],
    },
  ];
}

export function circuitFindings(value: MapValue, declaration: Declared<'circuit'>, values: Values): Finding[] {
  const lines = linesOf(value, values, newBudget());
  if (typeof lines === 'string') return [openFinding(value.name, lines)];
  if (!values.lattice) return [];
  return automorphismFindings(value.name, lines.rules, {
    figures: { layers: declaration.layers.length },
    cautions: [...smallGateCautions(declaration, values.lattice), ...edgeCautions(declaration, values.lattice)],
  });
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

/** What an open edge does to gates that reach from cell to cell. */
function edgeCautions({ layers }: Declared<'circuit'>, lattice: Lattice): string[] {
  if (lattice.periodic.every((p) => p)) return [];
  const reaching = layers.some((layer) =>
    layer.gates.some(({ targets }) =>
      targets.some((a) =>
        targets.some((b) => a.cell.offset.some((c, d) => !lattice.periodic[d] && c !== b.cell.offset[d])),
      ),
    ),
  );
  return reaching
    ? [
        'Images are those of the infinite lattice, cut at the open edge; where the edge cuts a gate off, the image of a term near it may be another one.',
      ]
    : [];
}

/** The law of a gauging map. */
const gaussOf = (value: MapValue): LawValue | undefined => value.map.laws.get('gauss');

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
  const lines = linesOf(value, values, newBudget());
  if (typeof lines === 'string') return [openFinding(value.name, lines)];
  const { rules } = lines;
  const own = dictionaryFindings(value, lines, values, sizes);
  const fluxes = offeredFluxes(declaration, { family: lattice.family });
  const proofs = lawProofs(rules, gauss);
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
  return [law, ...choiceFinding(value, declaration, values, own[0]?.figures ?? {}), ...own];
}

/** Terms of several links of the models that a gauging was applied to, with the choice of path that was made. */
function longTerms(value: MapValue, values: Values): string[] {
  const budget = newBudget();
  return [...values.all.values()].flatMap((other) => {
    const origin = other.what === 'model' && other.image?.map === value.name ? values.find(other.image.of) : undefined;
    return origin?.what === 'model' ? value.map.cautions(origin.operator, budget) : [];
  });
}

/** That any two choices of path for a term of several links are equal where the field is flat; nothing where there is no choice. */
function choiceFinding(
  value: MapValue,
  { gauge }: Declared<'gauge'>,
  values: Values,
  figures: Readonly<Record<string, unknown>>,
): Finding[] {
  const { lattice } = values;
  if (!lattice || gauge.classes.length < lattice.family.links.length) return [];
  try {
    const { cycles, proofs } = flatChoices(lattice.family, newBudget(flatOperations));
    if (cycles === 0 || proofs.length === 0) return [];
    const long = [...new Set(longTerms(value, values))];
    const words = `any two choices of links that join the charges of a term under ${value.name} differ by fluxes of ${gauge.name}`;
    if (proofs.length < cycles)
      return [
        openFinding(
          words,
          'some closed paths of links are no product of rims: choices that differ by them differ where the field is flat too',
          { ...figures, long },
        ),
      ];
    return [
      {
        evidence: { kind: 'all sizes', proof: proofs },
        statement: `${words}, on ${sizesWords(proofs)}: they are equal where every flux is +1`,
        figures: { ...figures, long },
        cautions: [
          'Paths that differ by a turn around the lattice differ by its holonomy besides.',
          ...long.map((one) => `${one}.`),
        ],
        sources: ['Closed paths of links as kernel of the boundary map over Laurent polynomials: derived here.'],
      },
    ];
  } catch (error) {
    if (error instanceof BudgetSpent) return [];
    throw error;
  }
}

/** Operations that the algebra of closed paths may take. */
const flatOperations = 3_000_000;

/** Proofs that all images commute with the law; undefined where one does not. */
function lawProofs(rules: readonly DictionaryRule[], law: LawValue): AllSizes[] | undefined {
  const budget = newBudget();
  const proofs: AllSizes[] = [];
  for (const { right, steps } of rules) {
    if ('parts' in right) return undefined;
    const operator: Operator = {
      families: [{ coefficient: Coefficient.one, string: right, steps, needs: [] }],
      extended: [],
    };
    for (const term of operatorPieces('image', operator))
      for (const piece of piecesOf(law) ?? []) {
        const verdict = commutePieces(term, piece, budget);
        if (verdict.commutes !== true) return undefined;
        proofs.push(verdict.evidence);
      }
  }
  return proofs;
}

/** Unitary gauge: each law holds its own copy of the spin, so fixing these keeps all products of operators that commute with the law. */
export function solveFindings(
  value: MapValue,
  declaration: Declared<'solve'>,
  values: Values,
  sizes: readonly Size[],
): Finding[] {
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
      sources: [unitaryGauge],
    },
    ...solvedLines(value, values, sizes),
  ];
}

const unitaryGauge = 'Unitary gauge: E. Fradkin, S. Shenker, Phys. Rev. D 19, 3682 (1979).';

/** The same map as a dictionary of all that commutes with the law: what is left of the sector, and its dimension. */
function solvedLines(value: MapValue, values: Values, sizes: readonly Size[]): Finding[] {
  const lines = linesOrWhy(value, values, newBudget());
  return typeof lines === 'string' ? [] : dictionaryFindings(value, lines, values, sizes);
}

/** The way back from a unitary gauge: a redundant species is introduced, with the law that makes it redundant. */
export function restoreFindings(
  value: MapValue,
  { law, species }: Declared<'solve'>,
  values: Values,
  sizes: readonly Size[],
): Finding[] {
  const lines = linesOrWhy(value, values, newBudget());
  if (typeof lines === 'string') return [openFinding(value.name, lines)];
  const proofs = lawProofs(lines.rules, law);
  const words = `every image under ${value.name} commutes with ${law.name}`;
  const introduced: Finding = proofs
    ? {
        evidence: { kind: 'all sizes', proof: proofs },
        statement: `${value.name} introduces ${species.name} with the law ${law.name}: ${words}, on ${sizesWords(proofs)}`,
        figures: { commutation: true, relations: 0, signs: true },
        cautions: [
          `The image stands for the sector ${law.name} = ${law.value === 1 ? '+1' : '-1'} of the larger model.`,
        ],
        sources: [unitaryGauge],
      }
    : openFinding(words, 'an image does not commute with the law');
  return [introduced, ...dictionaryFindings(value, lines, values, sizes)];
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
