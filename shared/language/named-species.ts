import type { Expression } from '../../grammar/syntax.ts';
import { speciesOfOperator } from '../algebra/pauli/family.ts';
import { dotted } from './calls.ts';
import type { Scene } from './scene.ts';

/**
 * Species that occur in an expression as written, also where their terms cancel or have the coefficient 0: a model lives on all of them.
 * What a map is applied to stays behind on its side.
 */
export function speciesNamed(node: Expression, scene: Scene, into: Set<string> = new Set()): ReadonlySet<string> {
  const visit = (inner: Expression): void => void speciesNamed(inner, scene, into);
  const value = node.type === 'name' || node.type === 'call' ? scene.values.find(dotted(node.path)) : undefined;
  switch (value?.what) {
    case 'model':
      value.species.forEach((name) => into.add(name));
      break;
    case 'operator':
      speciesOfOperator(value.operator).forEach((name) => into.add(name));
      break;
    case 'law':
      for (const { string } of value.families) string.factors.forEach((f) => into.add(f.species));
      break;
    case 'symmetry':
      for (const { string } of value.extended.parts) string.factors.forEach((f) => into.add(f.species));
      break;
    default:
  }
  switch (node.type) {
    case 'spin':
      into.add(node.species.text);
      break;
    case 'call':
      if (value?.what !== 'map') node.args.forEach(visit);
      break;
    case 'bracket':
    case 'big':
      visit(node.body);
      break;
    case 'power':
      visit(node.base);
      break;
    case 'product':
      node.factors.forEach(({ factor }) => {
        visit(factor);
      });
      break;
    case 'sum':
      node.terms.forEach(({ term }) => {
        visit(term);
      });
      break;
    default:
  }
  return into;
}
