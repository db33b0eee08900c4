import type { editionFormats } from '../contracts/reviews.ts';

export type Format = (typeof editionFormats)[number];

interface FormatRow {
  readonly media: string;
  /** End of a file's name. */
  readonly extension: string;
  /** What it is made of: the text alone, the report too, an edition's head, or a finite cluster. */
  readonly needs: 'text' | 'report' | 'edition' | 'model' | 'circuit' | 'remarks';
}

/** The formats that leave a notebook. */
export const formats: Readonly<Record<Format, FormatRow>> = {
  gw: { media: 'text/plain', extension: 'gw', needs: 'text' },
  json: { media: 'application/json', extension: 'json', needs: 'report' },
  article: { media: 'application/x-tex', extension: 'tex', needs: 'report' },
  annotations: { media: 'application/ld+json', extension: 'jsonld', needs: 'remarks' },
  bibtex: { media: 'application/x-bibtex', extension: 'bib', needs: 'edition' },
  cff: { media: 'application/yaml', extension: 'cff', needs: 'edition' },
  'pauli-csv': { media: 'text/csv', extension: 'csv', needs: 'model' },
  'matrix-market': { media: 'text/plain', extension: 'mtx', needs: 'model' },
  openqasm: { media: 'text/plain', extension: 'qasm', needs: 'circuit' },
};

/** A file name of letters, digits and hyphens. */
export function fileName(title: string, edition: number | null, format: Format): string {
  if (format === 'cff') return 'CITATION.cff';
  const words = title
    .normalize('NFKD')
    .replace(/[^A-Za-z0-9]+/g, '-')
    .replace(/^-+|-+$/g, '')
    .toLowerCase()
    .slice(0, 60);
  const name = words === '' ? 'notebook' : words;
  return `${name}${edition === null ? '' : `-edition-${String(edition)}`}.${formats[format].extension}`;
}
