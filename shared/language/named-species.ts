import type { Expression } from '../../grammar/syntax.ts';
import { speciesOfOperator } from '../algebra/pauli/family.ts';
import { dotted } from './calls.ts';
import type { Scene } from './scene.ts';
import type { MapDeclaration } from './values.ts';

/** Species of its argument that an image no longer has. */
function traded(declaration: MapDeclaration): ReadonlySet<string> {
  switch (declaration.kind) {
    case 'circuit':
    case 'gauge':
      return new Set();
    case 'solve':
      return new Set([declaration.species.name]);
    case 'dictionary':
    case 'states':
      return new Set(declaration.from);
    case 'then':
      return new Set([...traded(declaration.first.declaration), ...traded(declaration.second.declaration)]);
    case 'inverse':
      return gained(declaration.of.declaration);
  }
}

/** Species that an image has besides its argument's. */
function gained(declaration: MapDeclaration): ReadonlySet<string> {
  switch (declaration.kind) {
    case 'circuit':
    case 'solve':
      return new Set();
    case 'gauge':
      return new Set([declaration.gauge.name]);
    case 'dictionary':
    case 'states':
      return new Set(declaration.to);
    case 'then':
      return new Set([...gained(declaration.first.declaration), ...gained(declaration.second.declaration)]);
    case 'inverse':
      return traded(declaration.of.declaration);
  }
}

/**
 * Species that occur in an expression as written, also where their terms cancel or have the coefficient 0: a model lives on all of them.
 * What a map is applied to keeps its species, except those that the map trades for others: a circuit may leave a spin idle, not remove it.
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
      else {
        const before = new Set<string>();
        node.args.forEach((inner) => void speciesNamed(inner, scene, before));
        const gone = traded(value.declaration);
        before.forEach((name) => gone.has(name) || into.add(name));
      }
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
