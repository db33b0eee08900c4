import type { ClusterModel } from '../contracts/exchange.ts';
import type { Preview } from '../contracts/reviews.ts';

/**
 * A Hamiltonian as rows of a coefficient and a Pauli string: RFC 4180, comment lines with `#` before the header. The columns are
 * `re`, `im` (the coefficient as floating point), `paulis` ("X0 Z3": letter and site, from 0; empty for the identity) and `exact`.
 */
export function pauliCsv({ name, cluster, sites, strings }: ClusterModel): string {
  const head = [
    `# model ${name}, ${cluster}`,
    `# sites ${String(sites.length)}`,
    ...sites.map((what, site) => `# site ${String(site)} ${what}`),
  ];
  const rows = strings.map(({ re, im, paulis, exact }) => {
    const string = paulis.map(({ site, letter }) => `${letter}${String(site)}`).join(' ');
    return [String(re), String(im), quoted(string), quoted(exact)].join(',');
  });
  return [...head, 're,im,paulis,exact', ...rows, ''].join('\r\n');
}

const quoted = (text: string): string => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

type Faults = Preview['faults'];
interface Row {
  readonly line: number;
  readonly coefficient: string;
  readonly factors: readonly { readonly site: number; readonly letter: string }[];
}

/** Terms that one notebook takes from a file. */
const mostTerms = 4_000;
const mostSites = 4_096;
const termsOfModel = 1_500;

/**
 * Reads a Hamiltonian from rows of a coefficient and a Pauli string, sparse ("X0 Z3") or dense ("XIZ"), and writes it as a model on
 * an open chain: what a file of strings says about a lattice is no more than the number of its sites. With a column `exact`
 * that holds a number, that is taken; the imaginary part must vanish.
 */
export function readPauliCsv(source: string): {
  title: null;
  authors: string[];
  entries: { kind: 'prose' | 'statements'; text: string }[];
  faults: Faults;
} {
  const faults: Faults = [];
  const fault = (line: number, column: number, message: string): void => {
    if (faults.length < 100) faults.push({ line, column, message, severity: 'error' });
  };
  let columns: readonly string[] | null = null;
  let sites = 0;
  let notes: string[] = [];
  const rows: Row[] = [];
  source
    .replace(/^\uFEFF/, '')
    .split('\n')
    .forEach((text, at) => {
      const line = at + 1;
      const bare = text.replace(/\r$/, '');
      if (bare.trim() === '') return;
      if (bare.startsWith('#')) {
        const declared = /^#\s*sites\s+(\d{1,6})\s*$/.exec(bare)?.[1];
        if (declared !== undefined) sites = Math.max(sites, Number(declared));
        else if (!/^#\s*site\s/.test(bare)) notes = [...notes, bare.replace(/^#\s?/, '')];
        return;
      }
      const cells = cellsOf(bare);
      if (columns === null) {
        const named = cells.map(({ text: name }) => name.trim().toLowerCase());
        if (named.includes('paulis')) {
          columns = named;
          if (!named.includes('re') && !named.includes('coefficient'))
            fault(line, 1, 'A column "re" or "coefficient" is needed.');
          return;
        }
        columns = cells.length === 3 ? ['re', 'im', 'paulis'] : ['re', 'paulis'];
      }
      const row = rowOf(line, cells, columns, fault);
      if (row !== null) rows.push(row);
    });
  for (const { line, factors } of rows) {
    for (const { site } of factors) {
      sites = Math.max(sites, site + 1);
      if (site >= mostSites)
        fault(line, 1, `Site ${String(site)} is past the ${String(mostSites)} that a file can have.`);
    }
  }
  if (rows.length === 0 && faults.length === 0) fault(1, 1, 'There is no row with a coefficient and a Pauli string.');
  if (rows.length > mostTerms)
    fault(rows[mostTerms]?.line ?? 1, 1, `A notebook takes at most ${String(mostTerms)} terms.`);
  return {
    title: null,
    authors: [],
    entries: faults.length > 0 ? [] : entriesOf(rows, Math.max(sites, 1), notes),
    faults,
  };
}

interface CsvCell {
  readonly text: string;
  readonly column: number;
}

function cellsOf(line: string): CsvCell[] {
  const cells: CsvCell[] = [];
  const form = /(?:"((?:[^"]|"")*)"|([^,]*))(,|$)/y;
  for (;;) {
    const column = form.lastIndex + 1;
    const found = form.exec(line);
    if (found === null) {
      cells.push({ text: line.slice(column - 1), column });
      return cells;
    }
    cells.push({ text: (found[1]?.replaceAll('""', '"') ?? found[2] ?? '').trim(), column });
    if (found[3] === '') return cells;
  }
}

const decimal = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d{1,3})?$/i;
const fraction = /^-?\d+(?:\/\d+)?$/;

function rowOf(
  line: number,
  cells: readonly CsvCell[],
  columns: readonly string[],
  fault: (line: number, column: number, message: string) => void,
): Row | null {
  const cell = (...names: readonly string[]): CsvCell | undefined =>
    cells[columns.findIndex((name) => names.includes(name))];
  const re = cell('re', 'coefficient');
  const im = cell('im');
  const paulis = cell('paulis');
  if (re === undefined || paulis === undefined) {
    fault(line, 1, `${String(columns.length)} values are expected, parted by commas.`);
    return null;
  }
  if (!decimal.test(re.text)) {
    fault(line, re.column, `"${re.text}" is no number.`);
    return null;
  }
  if (im !== undefined && im.text !== '' && !(decimal.test(im.text) && Number(im.text) === 0)) {
    fault(line, im.column, 'The imaginary part of a coefficient must be 0: a Hamiltonian is Hermitian.');
    return null;
  }
  const factors = factorsOf(paulis.text);
  if (typeof factors === 'string') {
    fault(line, paulis.column, factors);
    return null;
  }
  const exact = cell('exact')?.text ?? '';
  return { line, coefficient: fraction.test(exact) ? exact : numberText(re.text), factors };
}

/** A number as the language writes it: with digits on both sides of the dot. */
const numberText = (text: string): string =>
  text
    .replace(/^\+/, '')
    .replace(/(^-?)\./, '$10.')
    .replace(/\.(?=e|$)/i, '.0')
    .toLowerCase();

function factorsOf(text: string): Row['factors'] | string {
  if (/^[ixyz]+$/i.test(text)) {
    return [...text.toUpperCase()].flatMap((letter, site) => (letter === 'I' ? [] : [{ site, letter }]));
  }
  const factors: { site: number; letter: string }[] = [];
  for (const word of text.split(/[\s*]+/).filter((one) => one !== '')) {
    const [, letter = '', site = ''] = /^([ixyz])_?\[?(\d{1,6})\]?$/i.exec(word) ?? [];
    if (letter === '') return `"${word}" is no Pauli operator: write X0, Y3 or Z12, or a word of I, X, Y, Z.`;
    if (factors.some((factor) => factor.site === Number(site))) return `Site ${site} stands twice in one string.`;
    if (letter.toUpperCase() !== 'I') factors.push({ site: Number(site), letter: letter.toUpperCase() });
  }
  return factors.sort((a, b) => a.site - b.site);
}

function entriesOf(
  rows: readonly Row[],
  sites: number,
  notes: readonly string[],
): { kind: 'prose' | 'statements'; text: string }[] {
  const term = ({ coefficient, factors }: Row, first: boolean): string => {
    const sign = coefficient.startsWith('-') ? '-' : first ? '' : '+';
    const string = factors.map(({ site, letter }) => `s^${letter.toLowerCase()}[vertices(${String(site)})]`);
    return `  ${sign}${sign === '' ? '' : ' '}${[coefficient.replace(/^-/, ''), ...string].join(' ')}`;
  };
  const models: { name: string; text: string }[] = [];
  for (let from = 0; from < rows.length; from += termsOfModel) {
    const name = rows.length <= termsOfModel ? 'read' : `read${String(models.length + 1)}`;
    const own = rows.slice(from, from + termsOfModel).map((row, at) => term(row, at === 0));
    models.push({ name, text: `model ${name} =\n${own.join('\n')}` });
  }
  const whole =
    models.length === 1 ? [] : [{ name: 'read', text: `model read = ${models.map(({ name }) => name).join(' + ')}` }];
  return [
    ...(notes.length === 0 ? [] : [{ kind: 'prose' as const, text: notes.join('\n') }]),
    { kind: 'statements', text: `lattice chain open ${String(sites)}\nspins s on vertices` },
    ...[...models, ...whole].map(({ text }) => ({ kind: 'statements' as const, text })),
  ];
}
