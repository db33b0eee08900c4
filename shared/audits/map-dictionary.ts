import type { Extended, LocalString } from '../algebra/pauli/types.ts';
import type { MapValue, Values } from '../language/values.ts';
import { BudgetSpent, newBudget } from '../limits.ts';
import { isStraight, sizeKey, straight, sizeText } from '../lattice/cluster.ts';
import type { Lattice, Size } from '../lattice/cells.ts';
import type { Context } from '../maps/context.ts';
import { keptCommutation, type CommutationBreak, type KeptCommutation } from '../maps/dictionary/commutation.ts';
import { isExtended, translateExtended } from '../maps/dictionary/decompose.ts';
import { cutTerms } from '../maps/dictionary/dictionary.ts';
import type { DictionaryDeclaration } from '../maps/dictionary/declaration.ts';
import { localRelations, type LocalRelations } from '../maps/dictionary/local.ts';
import { boundaries, boundaryWords } from '../maps/dictionary/boundaries.ts';
import { onSize, type SignBreak, type SizeFindings } from '../maps/dictionary/sizes.ts';
import { extendedPhrase, stringPhrase } from '../maps/phrases.ts';
import { translateString } from '../algebra/pauli/string.ts';
import type { Finding } from './audit.ts';
import { openFinding } from './numeric.ts';
import { sizesWords } from './pieces.ts';

const source =
  'Dualities as homomorphisms of bond algebras: E. Cobanera, G. Ortiz, Z. Nussinov, Adv. Phys. 60, 679 (2011).';

/** Small straight sizes on which relations are decided one by one besides the declared one. */
const extents = [1, 2, 3, 4];
const mostSpins = 512;
/** Operations that all seams of one map may take. */
const seamOperations = 4_000_000;

/** The sizes of the line; without any the declared one, and small straight ones of the same dimension, each once. */
export function sizesToDecide(lattice: Lattice, asked: readonly Size[] = []): readonly Size[] {
  if (asked.length > 0) return asked;
  const dimension = lattice.family.dimension;
  const cells = lattice.family.vertices.length + lattice.family.links.length + lattice.family.plaquettes.length;
  const small = extents
    .filter((extent) => cells * extent ** dimension <= mostSpins)
    .map((extent) => straight(...Array<number>(dimension).fill(extent)));
  const known = new Set([sizeKey(lattice.size)]);
  return [lattice.size, ...small.filter((size) => !known.has(sizeKey(size)))];
}

const sideText = (side: LocalString | Extended, by: readonly number[], context: Context): string =>
  isExtended(side)
    ? extendedPhrase(translateExtended(side, by), context.family)
    : stringPhrase(translateString(side, by), context.family);

/** The pair of rules that commute on one side only, in words and as data. */
function breakWitness(
  found: CommutationBreak,
  { rules }: DictionaryDeclaration,
  context: Context,
): Record<string, unknown> {
  const [first, second] = [rules[found.first], rules[found.second]];
  if (!first || !second) return {};
  const zero = found.shift.map(() => 0);
  const left = `${sideText(first.left, zero, context)} and ${sideText(second.left, found.shift, context)}`;
  const right = `${sideText(first.right, zero, context)} and ${sideText(second.right, found.shift, context)}`;
  const [does, doesNot] = found.leftCommute ? ['commute', 'anticommute'] : ['anticommute', 'commute'];
  return {
    rules: [first.rule, second.rule],
    shift: found.shift,
    leftOverlap: found.leftOverlap,
    rightOverlap: found.rightOverlap,
    words: `${left} ${does}, their images ${right} ${doesNot}`,
  };
}

const phaseWord = (phase: number): string => ['+1', 'i', '-1', '-i'][phase & 3] ?? '';

/** A product of generators whose two sides are ±1 with opposite signs, written out. */
function signWitness(
  found: SignBreak,
  { rules }: DictionaryDeclaration,
  context: Context,
  size: string,
): Record<string, unknown> {
  const shown = found.members.slice(0, 8);
  const written = (side: 'left' | 'right'): string =>
    shown
      .map(({ rule, by }) => {
        const it = rules[rule];
        return it ? `(${sideText(it[side], by, context)})` : '';
      })
      .join(' ');
  const more = found.members.length - shown.length;
  const rest = more > 0 ? ` … (${String(found.members.length)} factors)` : '';
  return {
    members: found.members,
    left: phaseWord(found.leftPhase),
    right: phaseWord(found.rightPhase),
    size,
    words: `on ${size} the product ${written('left')}${rest} is ${phaseWord(found.leftPhase)}, its image ${written('right')}${rest} is ${phaseWord(found.rightPhase)}`,
  };
}

function commutationFinding(
  name: string,
  kept: KeptCommutation,
  declaration: DictionaryDeclaration,
  context: Context,
  figures: Record<string, unknown>,
): Finding {
  if (kept.kept === false) {
    const [first] = kept.broken;
    return {
      evidence: { kind: 'counterexample' },
      statement: `${name} does not keep commutation`,
      figures,
      witness: first ? breakWitness(first, declaration, context) : {},
      sources: [source],
    };
  }
  if (kept.kept === 'depends')
    return openFinding(
      `${name} keeps commutation for all pairs of local rules`,
      'whether rules of unbounded support agree on commutation depends on the parity of the size; see the sizes decided one by one',
      figures,
    );
  return {
    evidence: { kind: 'all sizes', proof: kept.evidence },
    statement: `${name} keeps commutation: two left sides commute exactly where their images do, on ${sizesWords(kept.evidence)}`,
    figures,
    cautions: ['Commutation alone does not make a duality: signs of product relations are decided apart.'],
    sources: [source],
  };
}

const list = (words: readonly string[]): string => (words.length === 0 ? 'none' : words.join(', '));

/** Whether the two sectors have the same number of states. */
const dimensionWords = (found: SizeFindings): string =>
  found.leftDimension === found.rightDimension
    ? `both sectors have dimension 2^${String(found.leftDimension)}`
    : `the sectors have dimensions 2^${String(found.leftDimension)} and 2^${String(found.rightDimension)}: the larger side holds spins that the map does not see`;

/** Sectors of one side whose value is not the same on all sizes: "flip is +1 on 2, 4 and -1 on 3". */
function changing(all: readonly SizeFindings[], side: 'leftSectors' | 'rightSectors'): string[] {
  const values = new Map<string, Map<1 | -1, string[]>>();
  for (const found of all)
    for (const sector of found[side]) {
      if (!/ = [+-]1$/u.test(sector.text)) continue;
      const string = sector.text.replace(/ = [+-]1$/u, '');
      const own = values.get(string) ?? new Map<1 | -1, string[]>();
      own.set(sector.value, [...(own.get(sector.value) ?? []), found.size]);
      values.set(string, own);
    }
  return [...values].flatMap(([string, own]) => {
    const [plus, minus] = [own.get(1), own.get(-1)];
    return plus && minus ? [`${string} is +1 on ${plus.join(', ')} and -1 on ${minus.join(', ')}`] : [];
  });
}

function holdsFinding(
  name: string,
  all: readonly SizeFindings[],
  declared: SizeFindings,
  figures: Record<string, unknown>,
): Finding {
  const good = all
    .filter((found) => !found.signBreak && !found.commutationBroken)
    .sort((a, b) => a.leftSpins - b.leftSpins);
  const bad = all.filter((found) => found.signBreak ?? found.commutationBroken);
  const left = declared.leftSectors.map((sector) => sector.text);
  const right = declared.rightSectors.map((sector) => sector.text);
  const failing = bad.map((found) => found.size).join(', ');
  const depends = [...changing(good, 'leftSectors'), ...changing(good, 'rightSectors')];
  return {
    evidence: { kind: 'exact on', sizes: good.map((found) => found.size) },
    statement: `${name} keeps every product relation with its sign on ${good.map((found) => found.size).join(', ')}; on ${declared.size} it holds in the sector ${list(left)} on the left and ${list(right)} on the right`,
    figures: depends.length > 0 ? { ...figures, depends } : figures,
    cautions: [
      ...(depends.length > 0 ? [`The sign of a relation depends on the size: ${depends.join('; ')}.`] : []),
      `Signs of global relations do not follow from commutation: they hold on the listed sizes. On ${declared.size} ${dimensionWords(declared)}.`,
      ...(bad.length === 0
        ? []
        : [`On ${failing} the map fails: the sign of a relation, or commutation, is broken there.`]),
    ],
    sources: [source],
  };
}

/** Claims of a dictionary: commutation for every size; relations with their signs, sectors and dimensions per size. */
export function dictionaryFindings(
  value: MapValue,
  declaration: DictionaryDeclaration,
  values: Values,
  asked: readonly Size[] = [],
): Finding[] {
  const { lattice } = values;
  if (!lattice) return [];
  const budget = newBudget();
  const context: Context = {
    values,
    lattice,
    family: lattice.family,
    open: lattice.periodic.some((periodic) => !periodic),
    name: value.name,
  };
  const kept = keptCommutation(declaration.rules, budget);
  const sizes = sizesToDecide(lattice, asked);
  const decided = sizes.map((size) => ({ size, found: onSize(declaration, context, size, budget) }));
  const all = decided.flatMap(({ found }) => ('problem' in found ? [] : [found]));
  const [main = lattice.size] = sizes;
  const declared = all.find((found) => found.size === sizeText(main));
  // Translates are moved freely only where every line goes everywhere; else the sizes decide alone.
  const moving = declaration.rules.every((rule) => rule.steps.every((m) => m > 0));
  const local = kept.kept !== false && moving ? localRelations(declaration, context, budget) : undefined;
  const signs =
    kept.kept === false || !declared ? false : !local?.signBreak && !declared.signBreak && !declared.commutationBroken;
  const figures = {
    commutation: kept.kept === true || (kept.kept === 'depends' && declared?.commutationBroken === undefined),
    relations: declared ? declared.leftRelations : 0,
    signs,
    rules: declaration.rules.length,
    pairs: kept.pairs,
    ...(declared ? sizeFigures(declared) : {}),
  };
  const first = commutationFinding(value.name, kept, declaration, context, figures);
  if (kept.kept === false) return [first];
  if (!declared) {
    const problem =
      decided.flatMap(({ found }) => ('problem' in found ? [found.problem] : []))[0] ?? 'no size was decided';
    return [first, openFinding(`product relations of ${value.name}`, problem, { ...figures })];
  }
  if (local?.signBreak ?? declared.signBreak) {
    const good = all.filter((found) => !found.signBreak && !found.commutationBroken).map((found) => found.size);
    return [
      first,
      {
        evidence: { kind: 'counterexample' },
        statement: `${value.name} does not keep the sign of a product relation, so it is no duality${local?.signBreak ? '' : ` on ${declared.size}`}`,
        figures,
        witness: declared.signBreak
          ? signWitness(declared.signBreak, declaration, context, declared.size)
          : local?.signBreak
            ? signWitness(local.signBreak, declaration, context, 'every size')
            : {},
        cautions:
          local?.signBreak || good.length === 0
            ? []
            : [`The relation closes around the lattice; on ${good.join(', ')} all signs are kept.`],
        sources: [source],
      },
    ];
  }
  if (declared.commutationBroken)
    return [
      first,
      openFinding(
        `product relations of ${value.name} on ${declared.size}`,
        'wrapping breaks commutation on this size; take a larger one',
        figures,
      ),
    ];
  const tilted =
    isStraight(main) || asked.length > 0
      ? []
      : ['The declared size is tilted; the small sizes decided besides it are straight.'];
  const holds = holdsFinding(value.name, all, declared, figures);
  return [
    first,
    ...localFinding(value.name, local, figures),
    { ...holds, cautions: [...(holds.cautions ?? []), ...tilted, ...cutCautions(value, declaration, context)] },
    ...boundaryFinding(value.name, declaration, context, { main, declared, figures }),
  ];
}

/** What an open edge cuts of the models that a dictionary was applied to. */
function cutCautions(value: MapValue, declaration: DictionaryDeclaration, context: Context): string[] {
  return [...context.values.all.values()].flatMap((other) => {
    const origin =
      other.what === 'model' && other.image?.map === value.name ? context.values.find(other.image.of) : undefined;
    if (origin?.what !== 'model') return [];
    return cutTerms(declaration, origin.operator, context).map((words) => `${origin.name}: ${words}.`);
  });
}

/** Which boundary of one side answers which sector of the other; nothing where no seam fits or a limit ends the search. */
function boundaryFinding(
  name: string,
  declaration: DictionaryDeclaration,
  context: Context,
  {
    main,
    declared: found,
    figures,
  }: {
    readonly main: Size;
    readonly declared: SizeFindings;
    readonly figures: Readonly<Record<string, unknown>>;
  },
): Finding[] {
  try {
    const all = boundaries(declaration, context, main, found, newBudget(seamOperations));
    if (all.length === 0) return [];
    return [
      {
        evidence: { kind: 'exact on', sizes: [found.size] },
        statement: `boundaries under ${name} on ${found.size}: ${all.map(boundaryWords).join('; ')}`,
        figures: { ...figures, boundaries: all },
        cautions: [
          'A seam is the antiperiodic boundary of twist(M, P, d); sectors that are not named keep their values.',
        ],
        sources: [source],
      },
    ];
  } catch (error) {
    if (error instanceof BudgetSpent) return [];
    throw error;
  }
}

/** Local relations of the lines that repeat everywhere, for every size; nothing where a limit ends the search or a line stands still. */
function localFinding(name: string, local: LocalRelations | undefined, figures: Record<string, unknown>): Finding[] {
  if (!local || local.evidence.length === 0 || local.evidence.length < local.left + local.right) return [];
  const forced = (laws: typeof local.rightLaws): string => list([...new Set(laws.map((law) => law.text))]);
  return [
    {
      evidence: { kind: 'all sizes', proof: local.evidence },
      statement: `the local product relations of ${name} are kept with their signs or force a law, on ${sizesWords(local.evidence)}: on the left ${forced(local.leftLaws)}, on the right ${forced(local.rightLaws)}`,
      figures,
      cautions: ['Relations that close around the lattice are not among these; they are decided size by size.'],
      sources: [source],
    },
  ];
}

function sizeFigures(found: SizeFindings): Record<string, unknown> {
  return {
    size: found.size,
    generators: found.generators,
    leftRank: found.leftRank,
    rightRank: found.rightRank,
    leftRelations: found.leftRelations,
    rightRelations: found.rightRelations,
    leftSectors: found.leftSectors.map((sector) => sector.text),
    rightSectors: found.rightSectors.map((sector) => sector.text),
    leftDimension: found.leftDimension,
    rightDimension: found.rightDimension,
  };
}
