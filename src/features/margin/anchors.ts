import type { Remark, RemarkSubject } from '../../../shared/contracts/reviews.ts';
import { groupRef, type Held } from '../../hand/hand.ts';
import type { NamedModel, Slice } from '../../reading/slices.ts';

/** Where remarks stand, and what they can speak of: plain values, known without a browser. */

export type Show = 'open' | 'all' | 'none';

export interface Placed {
  /** Remarks by the entry beside which they stand, in the order in which they came. */
  readonly beside: ReadonlyMap<string, readonly Remark[]>;
  /** Those whose entry is not on the page. */
  readonly gone: readonly Remark[];
  /** All of them in the order of the page, for going from one to the next. */
  readonly order: readonly Remark[];
}

/** Places the remarks that are to be shown beside the entries of a page. */
export function placeRemarks(remarks: readonly Remark[], entries: readonly string[], show: Show): Placed {
  const shown = show === 'none' ? [] : remarks.filter((remark) => show === 'all' || remark.state === 'open');
  const there = new Set(entries);
  const beside = new Map<string, Remark[]>();
  for (const remark of shown) {
    const { entry } = remark.subject;
    if (!there.has(entry)) continue;
    beside.set(entry, [...(beside.get(entry) ?? []), remark]);
  }
  const gone = shown.filter((remark) => !there.has(remark.subject.entry));
  return { beside, gone, order: [...entries.flatMap((entry) => beside.get(entry) ?? []), ...gone] };
}

/** The remark to go to from `from` (null: from before the first), round at the ends; null where there is none. */
export function walk(order: readonly Remark[], from: string | null, way: 'next' | 'previous'): Remark | null {
  const at = order.findIndex((remark) => remark.id === from);
  if (at < 0) return (way === 'next' ? order[0] : order.at(-1)) ?? null;
  const to = at + (way === 'next' ? 1 : -1);
  return order[(to + order.length) % order.length] ?? null;
}

/** Something in an entry that a remark can speak of. */
export interface Choosable {
  readonly key: string;
  /** As it is offered in a list: words, no formulas. */
  readonly words: string;
  readonly subject: RemarkSubject;
}

/** The entry itself (with the words chosen in it, if any), then its terms, then its claims. */
export function subjectsOf(entry: string, slice: Slice | undefined, quote: string): readonly Choosable[] {
  const itself: Choosable =
    quote === ''
      ? { key: 'entry', words: 'the entry', subject: { what: 'entry', entry, quote: null } }
      : {
          key: 'entry',
          words: `“${quote.length > 60 ? `${quote.slice(0, 60)}…` : quote}”`,
          subject: { what: 'entry', entry, quote: { exact: quote, prefix: '', suffix: '' } },
        };
  const terms = (slice?.models ?? []).flatMap(({ value }) =>
    termsOf(value).map((term) => termSubject(entry, value, term)),
  );
  const claims = (slice?.claims ?? []).map(({ value }, k): Choosable => {
    const { audit, subject, statement, tex } = value;
    return {
      key: `claim-${String(k)}`,
      words: `claim: ${statement}`,
      subject: { what: 'claim', entry, audit, subject, statement, tex },
    };
  });
  return [itself, ...terms, ...claims];
}

/** One family for each gathered sum: what stands as one term on the page is spoken of as one. */
const termsOf = (model: NamedModel) =>
  model.groups.flatMap((_, group) => model.terms.find((term) => term.group === group && term.orbit.length > 0) ?? []);

function termSubject(entry: string, model: NamedModel, term: NamedModel['terms'][number]): Choosable {
  const group = model.groups[term.group];
  return {
    key: `term-${model.name}-${String(term.group)}`,
    words: `term of ${model.name}: ${group?.spoken ?? term.spoken}`,
    subject: {
      what: 'term',
      entry,
      model: model.name,
      orbit: [...term.orbit],
      steps: [...term.steps],
      tex: group?.tex ?? term.tex,
    },
  };
}

/** The term on the page that a remark speaks of, to take it in hand; null where it is not there any more. */
export function heldBy(subject: RemarkSubject, slices: readonly Slice[]): Held | null {
  if (subject.what !== 'term') return null;
  const wanted = JSON.stringify(subject.orbit);
  for (const slice of slices) {
    for (const { value } of slice.models) {
      if (value.name !== subject.model) continue;
      const term = value.terms.find((one) => JSON.stringify(one.orbit) === wanted);
      if (!term) continue;
      const ref = groupRef(value.name, term.group);
      return value.language === 'spin' ? { left: ref, right: null } : { left: null, right: ref };
    }
  }
  return null;
}

/** What became of a remark's subject, in words; empty where it stands as it stood. */
export function fate(remark: Remark, slices: readonly Slice[]): string {
  const { subject, stands, edition } = remark;
  if (stands === 'gone')
    return edition === null ? 'its entry is gone' : `its entry is gone; it stands in edition ${String(edition)}`;
  if (stands === 'changed') return 'the words it quotes are gone';
  if (subject.what === 'term' && heldBy(subject, slices) === null) return 'its term reads otherwise now';
  if (subject.what === 'claim') {
    const same = slices.some((slice) =>
      slice.claims.some(
        ({ value }) =>
          value.audit === subject.audit && value.subject === subject.subject && value.statement === subject.statement,
      ),
    );
    if (!same) return 'its claim reads otherwise now';
  }
  return '';
}
