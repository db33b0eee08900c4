import type { Budget } from '../../limits.ts';
import type { Context } from '../context.ts';
import type { DictionaryDeclaration } from './declaration.ts';
import { onSize, type SizeFindings, type SizeProblem } from './sizes.ts';

/** Findings on the declared size, computed once for each declaration: sentences of many images ask for them. */
const declaredSize = new WeakMap<DictionaryDeclaration, SizeFindings | SizeProblem>();

function onDeclaredSize(
  declaration: DictionaryDeclaration,
  context: Context,
  budget: Budget,
): SizeFindings | SizeProblem {
  const known = declaredSize.get(declaration);
  if (known) return known;
  const found = onSize(declaration, context, context.lattice.size, budget);
  declaredSize.set(declaration, found);
  return found;
}

/** What an image holds modulo: the sectors that the map's relations force on the right, on the declared size. */
export function sectorWords(declaration: DictionaryDeclaration, context: Context, budget: Budget): string[] {
  const found = onDeclaredSize(declaration, context, budget);
  if ('problem' in found) return [];
  if (found.signBreak) return [`${context.name} does not keep the sign of a relation: its image is no dual`];
  if (found.commutationBroken) return [`${context.name} does not keep commutation: its image is no dual`];
  const names = found.rightSectors.map((s) => s.text);
  return names.length === 0 ? [] : [`the image holds modulo ${names.join(', ')} (on ${found.size})`];
}
