import { valueKey } from '../audits/question.ts';
import type { Values } from '../language/values.ts';
import type { TypesetContext } from '../typeset/context.ts';
import { typesetContext as newContext } from '../typeset/declarations.ts';

/** How formulas of a program are set: one object as long as nothing that formulas depend on has changed. */
export interface TypesetOptions {
  readonly key: string;
  readonly context: TypesetContext;
}

let last: TypesetOptions | undefined;

/** The context of a program's formulas; the same object while lattice, species, laws, operators and maps are the same. */
export function typesetContext(values: Values): TypesetOptions | undefined {
  const parts = [...values.all.values()].filter((value) => value.what !== 'model' && value.what !== 'coupling');
  const key = `${values.lattice?.family.name ?? ''} ${JSON.stringify(values.lattice?.family.vectors ?? [])} ${parts.map(valueKey).join('\n')}`;
  if (last && last.key === key) return last;
  const context = newContext(values);
  if (!context) return undefined;
  last = { key, context };
  return last;
}
