import type { Operator } from '../algebra/pauli/types.ts';
import type { ReportImage } from '../contracts/report.ts';
import type { MapValue, Values } from '../language/values.ts';
import { imagesOf, type ImageRow } from '../maps/images.ts';
import type { TypesetContext } from '../typeset/context.ts';
import { nameTex } from '../typeset/names.ts';
import { operatorSpoken, operatorTex } from '../typeset/operators.ts';
import { orbitOf, supportsOf } from './models.ts';

/** The tables of images of all maps, set in type. */

const isConstant = ({ families, extended }: Operator): boolean =>
  extended.every((term) => term.extended.parts.length === 0) && families.every((f) => f.string.factors.length === 0);

/** A string at one place, a product over the lattice, a sum, or ±1. */
function kindOf(image: Operator | undefined): ReportImage['image'] {
  if (!image) return 'none';
  if (isConstant(image)) return 'constant';
  if (image.families.length + image.extended.length > 1 || image.families.some((f) => f.steps.some((m) => m > 0)))
    return 'sum';
  return image.extended.length > 0 ? 'product' : 'string';
}

/** Why there is no image, or none at one place. */
function reasonOf(row: ImageRow): string {
  if (row.refusal) return row.refusal.reason;
  const wide = row.what !== 'symmetry' && row.right !== undefined && kindOf(row.right) === 'product';
  const from = row.left.extended.length === 0;
  return wide && from ? 'its image is a string of unbounded support, so it is no local operator on the other side' : '';
}

const supports = (operator: Operator | undefined, context: TypesetContext): ReportImage['leftSupports'] =>
  operator
    ? [
        ...operator.families
          .filter((f) => f.string.factors.length > 0)
          .map((f) => ({ orbit: orbitOf(f.string.factors, context), steps: [...f.steps] })),
        ...operator.extended.flatMap((term) => supportsOf(term.extended, context)),
      ]
    : [];

function rowSet(value: MapValue, row: ImageRow, context: TypesetContext): ReportImage {
  const tex = (operator: Operator): string => operatorTex(operator, context, 'page');
  const image = kindOf(row.right);
  const right = row.right === undefined ? '' : row.known === undefined ? tex(row.right) : nameTex(row.known);
  const reason = reasonOf(row);
  const said = row.right ? operatorSpoken(row.right, context) : `none: ${reason}`;
  return {
    map: value.name,
    line: value.place.line,
    what: row.what,
    name: row.name,
    image,
    left: tex(row.left),
    right,
    spoken: `${operatorSpoken(row.left, context)} becomes ${row.known ?? said}`,
    reason,
    symmetry: row.refusal?.symmetry?.text ?? '',
    pair: row.pair ? { left: tex(row.pair.left), right: tex(row.pair.right) } : null,
    notes: [...row.notes],
    leftSupports: supports(row.left, context),
    rightSupports: supports(row.right, context),
  };
}

const set = new WeakMap<
  ImageRow,
  { readonly context: TypesetContext; readonly line: number; readonly row: ReportImage }
>();

/** For each map, what becomes of spins, operators, laws and symmetries, row by row in the order of the source. */
export function reportImages(values: Values, context: TypesetContext): ReportImage[] {
  return [...values.all.values()].flatMap((value) =>
    value.what === 'map'
      ? imagesOf(value, values).map((row) => {
          const before = set.get(row);
          if (before?.context === context && before.line === value.place.line) return before.row;
          const made = rowSet(value, row, context);
          set.set(row, { context, line: value.place.line, row: made });
          return made;
        })
      : [],
  );
}
