import type { Claim, ReportTerm } from '../../../shared/contracts/report.ts';
import type { Slice } from '../../reading/slices.ts';

/** The table of a commutation audit as plain data: terms against laws. */

export interface Mark {
  readonly law: string;
  readonly holds: boolean;
  /** True where it holds by the parity of the declared size only. */
  readonly atSize: boolean;
  /** Why it fails, in one sentence; empty where it holds. */
  readonly words: string;
}

export interface TermRow {
  /** Number that the audit knows the term by. */
  readonly term: number;
  /** TeX of the family; null where the subject is no model of the reading. */
  readonly tex: string | null;
  readonly spoken: string;
  /** One mark a law, in the order of `laws`. */
  readonly marks: readonly Mark[];
}

export interface Commutation {
  readonly subject: string;
  readonly laws: readonly string[];
  readonly rows: readonly TermRow[];
}

interface Cell {
  readonly term: number;
  readonly law: string;
  readonly holds: boolean;
  readonly atSize?: boolean;
  readonly witness?: { readonly words?: unknown };
}

const isCell = (value: unknown): value is Cell => {
  if (typeof value !== 'object' || value === null) return false;
  const { term, law, holds } = value as Partial<Cell>;
  return typeof term === 'number' && typeof law === 'string' && typeof holds === 'boolean';
};

/** The table behind a claim of a commutation audit; null for claims without one. */
export function commutationOf(claim: Claim, slices: readonly Slice[]): Commutation | null {
  const { table } = claim.figures;
  if (claim.audit !== 'commute' || !Array.isArray(table)) return null;
  const cells = table.filter(isCell);
  const laws = [...new Set(cells.map((cell) => cell.law))];
  if (laws.length === 0) return null;
  const model = slices.flatMap((slice) => slice.models).find((item) => item.value.name === claim.subject);
  const known = new Map<number, ReportTerm>();
  for (const term of model?.value.terms ?? []) if (term.piece !== undefined) known.set(term.piece, term);
  const numbers = [...new Set(cells.map((cell) => cell.term))];
  const place = new Map([...known.keys()].map((piece, k) => [piece, k]));
  // The order of the model on the page; what it does not know, by number behind it.
  numbers.sort((a, b) => (place.get(a) ?? known.size + a) - (place.get(b) ?? known.size + b));
  const rows = numbers.map((term) => {
    const family = known.get(term);
    const marks = laws.map((law): Mark => {
      const cell = cells.find((one) => one.term === term && one.law === law);
      const words = cell?.witness?.words;
      const holds = cell?.holds ?? false;
      return { law, holds, atSize: cell?.atSize ?? false, words: typeof words === 'string' ? words : '' };
    });
    return { term, tex: family?.tex ?? null, spoken: family?.spoken ?? `term ${String(term + 1)}`, marks };
  });
  return { subject: claim.subject, laws, rows };
}

export const fails = (row: TermRow): boolean => row.marks.some((mark) => !mark.holds);

const quoted = (text: string): string => (/[",\n]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text);

/** Comma-separated values (RFC 4180): a head line, then one line a term. */
export function commutationCsv({ laws, rows }: Commutation): string {
  const head = ['term', 'TeX', ...laws];
  const lines = rows.map((row) => [
    row.spoken,
    row.tex ?? '',
    ...row.marks.map((mark) => (mark.holds ? 'commutes' : 'fails')),
  ]);
  return [head, ...lines].map((line) => line.map(quoted).join(',')).join('\r\n') + '\r\n';
}

const escaped = (text: string): string => text.replace(/[\\_&%$#{}~^]/g, (sign) => texSigns.get(sign) ?? `\\${sign}`);
const texSigns: ReadonlyMap<string, string> = new Map([
  ['\\', '\\textbackslash{}'],
  ['~', '\\textasciitilde{}'],
  ['^', '\\textasciicircum{}'],
]);

/** Inks of operators are this page's own macros: `\px{…}` is its content to any other TeX. */
const withoutInks = (tex: string): string => tex.replace(/\\p[xyz](?=\{)/g, '');

/** The table as a LaTeX tabular; needs amsmath and amssymb. */
export function commutationTex({ laws, rows }: Commutation): string {
  const lines = rows.map((row) => {
    const name = row.tex === null ? escaped(row.spoken) : `$${withoutInks(row.tex)}$`;
    return `${[name, ...row.marks.map((mark) => (mark.holds ? '$\\checkmark$' : '$\\times$'))].join(' & ')} \\\\`;
  });
  return [
    `\\begin{tabular}{l${'c'.repeat(laws.length)}}`,
    `\\hline`,
    `${['', ...laws.map(escaped)].join(' & ')} \\\\`,
    `\\hline`,
    ...lines,
    `\\hline`,
    `\\end{tabular}`,
    '',
  ].join('\n');
}
