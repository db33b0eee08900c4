import type { Claim, Problem, Report, ReportDeclaration, ReportModel } from '../../shared/contracts/report.ts';

/** An entry of the notebook with the lines it has in the joined text; lines count from 1, `last` inclusive. */
export interface Placed {
  readonly id: string;
  readonly kind: 'prose' | 'statements';
  readonly text: string;
  readonly first: number;
  readonly last: number;
}

/** One thing of the report, with its line in its own entry (from 0). `stale`: kept from before, while the text is broken. */
export interface Item<T> {
  readonly line: number;
  readonly stale: boolean;
  readonly value: T;
}

export type NamedModel = ReportModel & { readonly name: string };

/** What one entry holds. Lines inside the values are the entry's own, so that an entry that only moves stays the same value. */
export interface Slice {
  readonly id: string;
  readonly kind: 'prose' | 'statements';
  readonly text: string;
  readonly models: readonly Item<NamedModel>[];
  readonly declarations: readonly Item<ReportDeclaration>[];
  readonly claims: readonly Item<Claim>[];
  readonly problems: readonly Item<Problem>[];
}

const within = (entry: Placed, line: number): boolean => line >= entry.first && line <= entry.last;

function freshSlice(report: Report, entry: Placed): Slice {
  const own = (line: number) => line - entry.first;
  const here = <T extends { readonly line: number }>(values: readonly T[]): Item<T>[] =>
    values
      .filter((value) => within(entry, value.line))
      .map((value) => ({ line: own(value.line), stale: false, value: { ...value, line: own(value.line) } }));
  const models = Object.entries(report.models).map(([name, model]) => ({ ...model, name }));
  return {
    id: entry.id,
    kind: entry.kind,
    text: entry.text,
    models: here(models).map((item) => ({
      ...item,
      value: {
        ...item.value,
        groups: item.value.groups.map((group) =>
          group.place ? { ...group, place: { ...group.place, line: own(group.place.line) } } : group,
        ),
      },
    })),
    declarations: here(report.declarations),
    claims: here(report.claims),
    problems: here(report.problems),
  };
}

const isError = (item: Item<Problem>): boolean => item.value.severity === 'error';

/** Line (from 0) of the statement in `text` that declares `name`, or −1. Couplings and spins may share a line. */
function lineOfName(text: string, name: string): number {
  const declares = new RegExp(
    `^[a-z]+\\s(?:.*[\\s,])?${name.replace(/[^\p{L}\p{N}_]/gu, '\\$&')}(?![\\p{L}\\p{N}_])`,
    'u',
  );
  return text.split('\n').findIndex((line) => declares.test(line));
}

/**
 * What a broken text still shows: things of the last good slice that the report no longer has, as long as the statement
 * that made them is still there by name, or stands at the line of an error.
 */
function keep<T>(
  now: readonly Item<T>[],
  before: readonly Item<T>[],
  same: (a: T, b: T) => boolean,
  find: (item: Item<T>) => number,
): readonly Item<T>[] {
  const kept = before
    .filter((item) => !now.some((fresh) => same(fresh.value, item.value)))
    .flatMap((item) => {
      const line = find(item);
      return line < 0 ? [] : [{ line, stale: true, value: item.value }];
    });
  return kept.length === 0 ? now : [...now, ...kept].sort((a, b) => a.line - b.line);
}

function withKept(now: Slice, before: Slice): Slice {
  const broken = new Set(now.problems.filter(isError).map((item) => item.line));
  const lines = now.text.split('\n');
  const linesBefore = before.text.split('\n');
  const byName = (name: string, line: number) => {
    const found = lineOfName(now.text, name);
    return found >= 0 ? found : broken.has(line) ? line : -1;
  };
  return {
    ...now,
    models: keep(
      now.models,
      before.models,
      (a, b) => a.name === b.name,
      (i) => byName(i.value.name, i.line),
    ),
    declarations: keep(
      now.declarations,
      before.declarations,
      (a, b) => a.name === b.name && a.what === b.what,
      (i) => byName(i.value.name, i.line),
    ),
    claims: keep(
      now.claims,
      before.claims,
      (a, b) => a.audit === b.audit && a.statement === b.statement,
      (i) => lines.indexOf(linesBefore[i.line] ?? '\n'),
    ),
  };
}

/** The same value as `before` when nothing in it changed, so that what is drawn from it stays as it is. */
export const sameOr = <T>(before: T | undefined, now: T): T =>
  before !== undefined && JSON.stringify(before) === JSON.stringify(now) ? before : now;

/**
 * Slices of a report, one an entry, in the notebook's order. While there is an error anywhere, what it takes away is kept
 * from `before` and marked stale; without errors nothing is kept.
 */
export function slicesOf(report: Report, entries: readonly Placed[], before: readonly Slice[]): readonly Slice[] {
  const known = new Map(before.map((slice) => [slice.id, slice]));
  const broken = report.problems.some((problem) => problem.severity === 'error');
  return entries.map((entry) => {
    const fresh = freshSlice(report, entry);
    const old = known.get(entry.id);
    return sameOr(old, broken && old ? withKept(fresh, old) : fresh);
  });
}
