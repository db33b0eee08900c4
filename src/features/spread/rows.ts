import type { Claim, Grade, ReportDeclaration } from '../../../shared/contracts/report.ts';
import { groupRef, nameRef, type Held, ruleRef } from '../../hand/hand.ts';
import { sameOr, type Item, type NamedModel, type Slice } from '../../reading/slices.ts';
import type { EntryRows, Head, Pair, Row, Term } from './row.ts';
import { markOf, marksOfName } from './verdict.ts';

/** What the page shows, row by row: term against term, and what spans both pages. Plain values, compared by value. */

const settings: readonly ReportDeclaration['what'][] = ['lattice', 'spins', 'couplings'];

/** `ising` → H with the name as its index; a name of one letter stands alone. Underscores are kept as the trade prints them. */
export function modelTex(name: string): string {
  const plain = name.replace(/_/g, '\\_');
  return name.length === 1 ? plain : `H_{\\mathrm{${plain}}}`;
}

function termOf(model: NamedModel, entry: string, index: number): Term | null {
  const group = model.groups[index];
  if (!group) return null;
  const found = new Set(model.terms.filter((t) => t.group === index).flatMap((t) => t.orbit.map((o) => o.pauli)));
  return {
    ref: groupRef(model.name, index),
    tex: group.tex,
    spoken: group.spoken,
    kind: group.kind,
    paulis: (['x', 'y', 'z'] as const).filter((pauli) => found.has(pauli)),
    place: group.place && { entry, line: group.place.line, column: group.place.column },
  };
}

interface Standing {
  readonly item: Item<NamedModel>;
  readonly entry: string;
}

/** The first model that is declared as the image of `name` and stands on the other page: it is set beside it. */
function facing(name: string, language: string, models: readonly Standing[]): Standing | undefined {
  return models.find(
    ({ item: { value } }) => value.image?.of === name && value.language !== language && value.name !== name,
  );
}

function termRow(source: Standing, image: Standing | undefined, claims: readonly Claim[], note: string | null): Row {
  const model = source.item.value;
  const other = image?.item.value;
  const map = other?.image?.map ?? null;
  const used = new Set<number>();
  const pairs: Pair[] = [];
  const put = (from: Term | null, to: Term | null) => {
    const [left, right] = model.language === 'spin' ? [from, to] : [to, from];
    pairs.push({ left, right, mark: markOf(claims, map, model, from, other, to) });
  };
  model.groups.forEach((_, index) => {
    const images = (other?.image?.pairs ?? []).filter(([from]) => from === index).map(([, to]) => to);
    const from = termOf(model, source.entry, index);
    const fresh = images.filter((to) => !used.has(to));
    for (const to of fresh) used.add(to);
    const targets = image && other ? fresh.map((to) => termOf(other, image.entry, to)) : [];
    put(from, targets[0] ?? null);
    for (const to of targets.slice(1)) put(null, to);
  });
  if (image && other) {
    other.groups.forEach((_, index) => {
      if (!used.has(index)) put(null, termOf(other, image.entry, index));
    });
  }
  const head: Head = { name: model.name, tex: modelTex(model.name), note };
  const otherHead: Head | null = other ? { name: other.name, tex: modelTex(other.name), note: null } : null;
  const [left, right] = model.language === 'spin' ? [head, otherHead] : [otherHead, head];
  const stale = source.item.stale || (image?.item.stale ?? false);
  return { what: 'terms', key: `model ${model.name}`, line: source.item.line, stale, left, right, map, pairs };
}

function declarationHeld(declaration: ReportDeclaration): Held {
  const ref = nameRef(declaration.name);
  return declaration.language === 'gauge' ? { left: null, right: ref } : { left: ref, right: null };
}

/** The two sides of a map's rule, as the hand knows them. */
export const ruleHeld = (map: string, rule: number): Held => ({
  left: ruleRef(map, rule, 'left'),
  right: ruleRef(map, rule, 'right'),
});

function rowsOfSlice(slice: Slice, models: readonly Standing[], claims: readonly Claim[]): readonly Row[] {
  const rows: Row[] = [];
  for (const item of slice.models) {
    const { value } = item;
    const of = models.find((other) => other.item.value.name === value.image?.of);
    // An image is set where its source stands, unless both are on one page or another image stands there already.
    if (of && value.image && facing(value.image.of, of.item.value.language, models)?.item === item) {
      const { map, of: source } = value.image;
      const key = `model ${value.name}`;
      const { line, stale } = item;
      rows.push({ what: 'elsewhere', key, line, stale, name: value.name, map, of: source, entry: of.entry });
      continue;
    }
    const image = facing(value.name, value.language, models);
    const note = value.image ? `${value.image.map} of ${value.image.of}` : null;
    rows.push(termRow({ item, entry: slice.id }, image, claims, note));
  }
  for (const item of slice.declarations) {
    const { line, stale, value } = item;
    if (settings.includes(value.what)) continue;
    const key = `${value.what} ${value.name}`;
    const marks = marksOfName(claims, value.what, value.name);
    rows.push({ what: 'declaration', key, line, stale, declaration: value, held: declarationHeld(value), marks });
  }
  const setting = slice.declarations.filter((item) => settings.includes(item.value.what));
  const first = setting[0];
  if (first)
    rows.push({
      what: 'setting',
      key: 'setting',
      line: first.line,
      stale: setting.some((item) => item.stale),
      parts: setting.map(({ value }) => ({ what: value.what, tex: value.tex, spoken: value.spoken })),
    });
  for (const line of new Set(slice.claims.map((item) => item.line))) {
    const here = slice.claims.filter((item) => item.line === line);
    rows.push({
      what: 'claims',
      key: `claims ${String(line)}`,
      line,
      stale: here.some((item) => item.stale),
      audit: here[0]?.value.audit ?? '',
      claims: here.map((item) => item.value),
    });
  }
  return rows.sort((a, b) => a.line - b.line);
}

const gradeFails = (grade: Grade): boolean => grade === 'refuted';

/** Rows of every entry. What did not change is the same value as in `before`. */
export function rowsOf(slices: readonly Slice[], before: readonly EntryRows[]): readonly EntryRows[] {
  const known = new Map(before.map((rows) => [rows.id, rows]));
  const models = slices.flatMap((slice) => slice.models.map((item) => ({ item, entry: slice.id })));
  const claims = slices.flatMap((slice) => slice.claims.map((item) => item.value));
  return slices.map((slice) => {
    const refuted = slice.claims.some((item) => gradeFails(item.value.grade));
    const problem = slice.problems.some((item) => item.value.severity === 'error');
    const fails = refuted ? 'refuted' : problem ? 'problem' : null;
    return sameOr(known.get(slice.id), { id: slice.id, rows: rowsOfSlice(slice, models, claims), fails });
  });
}

/** What an entry is called in the contents: its heading, its first words, or the names that it declares. */
export function titleOf(slice: { readonly kind: string; readonly text: string }): string {
  const lines = slice.text.split('\n').map((line) => line.trim());
  const first = lines.find((line) => line !== '') ?? '';
  if (slice.kind === 'prose') return short(first.replace(/^#+\s*/, '').replace(/[*_`$]/g, '')) || 'Empty prose';
  if (first.startsWith('#')) return short(first.replace(/^#+\s*/, ''));
  const named = slice.text.match(/^(model|map|law|symmetry|operator|rule|lattice|reference)\s+([\p{L}\p{N}_]+)/mu);
  const audit = slice.text.match(/^audit\s+(.+)$/m);
  if (named?.[1] === 'lattice') return `The ${named[2] ?? ''} lattice`;
  if (named) return `${capital(named[1] ?? '')} ${named[2] ?? ''}`;
  if (audit) return short(`Audit ${audit[1] ?? ''}`);
  return short(first) || 'Empty entry';
}

const capital = (word: string): string => word.charAt(0).toUpperCase() + word.slice(1);
const short = (text: string): string => (text.length > 42 ? `${text.slice(0, 40).replace(/\s\S*$/, '')} …` : text);

/** The pair whose source the caret is in: the last one that begins at or before it in this entry. */
export function heldAt(all: readonly EntryRows[], entry: string, line: number, column: number): Held | null {
  let best: { held: Held; line: number; column: number } | null = null;
  for (const { rows } of all)
    for (const row of rows) {
      if (row.what !== 'terms') continue;
      for (const pair of row.pairs)
        for (const place of [pair.left?.place, pair.right?.place]) {
          if (place?.entry !== entry) continue;
          if (place.line > line || (place.line === line && place.column > column)) continue;
          const later = !best || place.line > best.line || (place.line === best.line && place.column > best.column);
          if (later)
            best = {
              held: { left: pair.left?.ref ?? null, right: pair.right?.ref ?? null },
              line: place.line,
              column: place.column,
            };
        }
    }
  return best?.held ?? null;
}
