import type { Hover } from '../../../shared/contracts/assist.ts';
import type { Slice } from '../../reading/slices.ts';

/** What a name is, with its formula as the page sets it, and the words for the ear. */
export interface Explained {
  readonly hover: Hover;
  readonly tex: string | undefined;
  readonly spoken: string | undefined;
}

/** Puts the formula of a declared name, as the report has it, beside what the engine says of it. */
export function explained(hover: Hover, slices: readonly Slice[]): Explained {
  const { name } = hover;
  const models = slices.flatMap((slice) => slice.models.map((item) => item.value));
  const model = models.find((one) => one.name === name);
  if (model) return { hover, tex: `${model.tex}`, spoken: model.spoken };
  const declared = slices.flatMap((slice) => slice.declarations.map((item) => item.value));
  const own = declared.find((one) => one.name === name && one.tex !== '');
  return { hover, tex: own?.tex, spoken: own?.spoken };
}

/** The same in one sentence, for a screen reader. */
export const inWords = ({ hover, spoken }: Explained): string => `${hover.title}. ${spoken ?? hover.text}`;
