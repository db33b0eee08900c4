export interface Cited {
  readonly title: string;
  readonly authors: readonly string[];
  readonly edition: number;
  readonly hash: string;
  /** ISO 8601. */
  readonly publishedAt: string;
  /** The permanent address of the edition. */
  readonly address: string;
}

const bibtexSpecial: Readonly<Record<string, string>> = {
  '\\': '\\textbackslash{}',
  '{': '\\{',
  '}': '\\}',
  '%': '\\%',
  '#': '\\#',
  $: '\\$',
  '&': '\\&',
  _: '\\_',
  '^': '\\^{}',
  '~': '\\~{}',
};
const bibtexText = (text: string): string => text.replace(/[\\{}%#$&_^~]/g, (one) => bibtexSpecial[one] ?? one);

/** "Okafor, Rana" of "Rana Okafor"; a name of one word, or with a comma, stays. */
function familyFirst(name: string): string {
  const words = name.trim().split(/\s+/);
  const family = words.at(-1) ?? '';
  return name.includes(',') || words.length < 2 ? name : `${family}, ${words.slice(0, -1).join(' ')}`;
}

/**
 * A BibTeX entry of an edition. Source of the form: O. Patashnik, "BibTeXing" (1988), entry type misc; `url` and `urldate` are the
 * usual additions, which older styles leave out.
 */
export function bibtex({ title, authors, edition, hash, publishedAt, address }: Cited): string {
  const family = familyFirst(authors[0] ?? 'notebook').split(',')[0] ?? '';
  const ascii = family
    .normalize('NFD')
    .replace(/[^A-Za-z]/g, '')
    .toLowerCase();
  const key = `${ascii === '' ? 'notebook' : ascii}${publishedAt.slice(0, 4)}e${String(edition)}`;
  const month = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'][
    Number(publishedAt.slice(5, 7)) - 1
  ];
  const fields = [
    ['author', `{${authors.map((name) => bibtexText(familyFirst(name))).join(' and ')}}`],
    // The inner braces keep the capitals of the title.
    ['title', `{{${bibtexText(title)}}}`],
    ['howpublished', `{Gaugewright notebook, edition ${String(edition)}}`],
    ['year', `{${publishedAt.slice(0, 4)}}`],
    ['month', month ?? '{}'],
    ['url', `{${address}}`],
    ['note', `{SHA-256 ${hash}}`],
  ].filter(([name, value]) => name !== 'author' || value !== '{}');
  return `@misc{${key},\n${fields.map(([name, value]) => `  ${String(name)} = ${String(value)},`).join('\n')}\n}\n`;
}

/** A string of YAML in double quotes (YAML 1.2, section 7.3.1: JSON's strings are among them). */
const yaml = (text: string): string => JSON.stringify(text);

/** A CITATION.cff of an edition: Citation File Format 1.2.0 (S. Druskat and others, 2021). */
export function citationFile({ title, authors, edition, hash, publishedAt, address }: Cited): string {
  const names = authors.length === 0 ? ['Anonymous'] : authors;
  return [
    'cff-version: 1.2.0',
    'message: "If you use this notebook, please cite this edition of it."',
    'type: dataset',
    `title: ${yaml(title)}`,
    'authors:',
    ...names.flatMap(authorLines),
    `version: ${yaml(`edition ${String(edition)}`)}`,
    `date-released: ${publishedAt.slice(0, 10)}`,
    `url: ${yaml(address)}`,
    'identifiers:',
    '  - type: other',
    `    value: ${yaml(`sha256:${hash}`)}`,
    '    description: "SHA-256 of the canonical content of the edition"',
    '',
  ].join('\n');
}

function authorLines(name: string): string[] {
  const [family = '', given] = familyFirst(name).split(', ');
  return given === undefined
    ? [`  - name: ${yaml(family)}`]
    : [`  - family-names: ${yaml(family)}`, `    given-names: ${yaml(given)}`];
}
