import type { Claim } from '../../../shared/contracts/report.ts';

/** What numerical claims hold, as plain data for plots and their tables. Energies are in the unit of the couplings. */

export interface Table {
  readonly head: readonly string[];
  readonly rows: readonly (readonly (string | number)[])[];
}

const isNumbers = (value: unknown): value is readonly number[] =>
  Array.isArray(value) && value.length > 0 && value.every((one) => typeof one === 'number');
const text = (value: unknown): string => (typeof value === 'string' ? value : '');

export interface LevelsOnSize {
  readonly size: string;
  /** The two models with their sectors, as the claim names them. */
  readonly names: readonly [string, string];
  /** Ascending. */
  readonly left: readonly number[];
  readonly right: readonly number[];
  readonly agree: boolean;
}

/** "… of A [p = +1] and B [w = +1] agree on …" → the two sides. */
function sidesOf(claim: Claim): readonly [string, string] {
  const said = /levels? of (.+\]?) and (.+?) (?:agrees?|differ)\b/.exec(claim.statement);
  const [a = '', b = ''] = claim.subject.split(', ');
  return [said?.[1] ?? a, said?.[2] ?? (b || a)];
}

export function spectraOf(claims: readonly Claim[]): readonly LevelsOnSize[] {
  return claims.flatMap((claim) => {
    const { left, right, size } = claim.figures;
    if (claim.audit !== 'spectrum' || !isNumbers(left) || !isNumbers(right)) return [];
    const agree = claim.grade !== 'refuted';
    return [{ size: text(size), names: sidesOf(claim), left, right, agree }];
  });
}

/** Levels closer than this, relative to the largest, are drawn as one. */
const together = 1e-7;

export interface Multiplet {
  readonly energy: number;
  readonly count: number;
}

/** Ascending levels gathered where they cannot be told apart in a drawing. */
export function multipletsOf(levels: readonly number[]): readonly Multiplet[] {
  const scale = Math.max(1, ...levels.map(Math.abs));
  const all: Multiplet[] = [];
  for (const energy of levels) {
    const last = all.at(-1);
    if (last && Math.abs(energy - last.energy) <= together * scale)
      all[all.length - 1] = { energy: last.energy, count: last.count + 1 };
    else all.push({ energy, count: 1 });
  }
  return all;
}

export const spectraTable = (spectra: readonly LevelsOnSize[]): Table => ({
  head: ['size', 'level', spectra[0]?.names[0] ?? 'left', spectra[0]?.names[1] ?? 'right'],
  rows: spectra.flatMap(({ size, left, right }) =>
    Array.from({ length: Math.max(left.length, right.length) }, (_, k) => [size, k + 1, left[k] ?? '', right[k] ?? '']),
  ),
});

export interface Point {
  readonly at: readonly number[];
  /** Null where there is no value. */
  readonly value: number | null;
}

export interface Scan {
  readonly size: string;
  readonly quantity: string;
  /** Couplings that take more than one value, in the order of the scan. */
  readonly moving: readonly string[];
  /** `at` has one number a moving coupling. */
  readonly points: readonly Point[];
}

const isPoints = (value: unknown): value is readonly (readonly number[])[] =>
  Array.isArray(value) && value.length > 0 && value.every(isNumbers);

function pointsOf(points: unknown, values: unknown): readonly Point[] {
  if (!isPoints(points) || !Array.isArray(values)) return [];
  return points.map((at, k) => {
    const value: unknown = values[k];
    return { at, value: typeof value === 'number' ? value : null };
  });
}

export function scansOf(claims: readonly Claim[]): readonly Scan[] {
  return claims.flatMap((claim) => {
    const { couplings, points, values, refined, size, quantity } = claim.figures;
    if (claim.audit !== 'scan' || !Array.isArray(couplings)) return [];
    const more = (refined ?? {}) as { readonly points?: unknown; readonly values?: unknown };
    const all = [...pointsOf(points, values), ...pointsOf(more.points, more.values)];
    const moves = couplings.map((_, d) => new Set(all.map((point) => point.at[d])).size > 1);
    const kept = all.map(({ at, value }) => ({ at: at.filter((_, d) => moves[d]), value }));
    if (all.length === 0) return [];
    const moving = couplings.filter((_, d) => moves[d]).map(String);
    const sorted = moving.length === 1 ? [...kept].sort((a, b) => (a.at[0] ?? 0) - (b.at[0] ?? 0)) : kept;
    return [{ size: text(size), quantity: text(quantity), moving, points: sorted }];
  });
}

export const scansTable = (scans: readonly Scan[]): Table => ({
  head: ['size', ...(scans[0]?.moving ?? []), scans[0]?.quantity ?? 'value'],
  rows: scans.flatMap(({ size, points }) => points.map(({ at, value }) => [size, ...at, value ?? ''])),
});

export interface Ground {
  readonly size: string;
  readonly energy: number;
  readonly degeneracy: number;
  /** Null: no level above. */
  readonly gap: number | null;
}

export function groundsOf(claims: readonly Claim[]): readonly Ground[] {
  return claims.flatMap((claim) => {
    const { size, energy, degeneracy, gap } = claim.figures;
    if (claim.audit !== 'degeneracy' || typeof energy !== 'number' || typeof degeneracy !== 'number') return [];
    return [{ size: text(size), energy, degeneracy, gap: typeof gap === 'number' ? gap : null }];
  });
}

export const groundsTable = (grounds: readonly Ground[]): Table => ({
  head: ['size', 'ground energy', 'ground states', 'gap'],
  rows: grounds.map(({ size, energy, degeneracy, gap }) => [size, energy, degeneracy, gap ?? 'no level above']),
});

/** Comma-separated values (RFC 4180), numbers with all their digits. */
export function csvOf({ head, rows }: Table): string {
  const quoted = (value: string | number): string =>
    typeof value === 'string' && /[",\n]/.test(value) ? `"${value.replace(/"/g, '""')}"` : String(value);
  return [head, ...rows].map((row) => row.map(quoted).join(',')).join('\r\n') + '\r\n';
}
