import type { Variation } from '../contracts/reviews.ts';

/** A text in which one claim is asked with other sizes or couplings; or why that cannot be, as a sentence. */
export type Varied = { readonly text: string } | { readonly fault: string };

const plainSize = String.raw`\d+(?:[ \t]*[x×][ \t]*\d+)*`;
const vector = String.raw`\([ \t]*-?\d+(?:[ \t]*,[ \t]*-?\d+)*[ \t]*\)`;
const size = `(?:${vector}(?:[ \\t]*,[ \\t]*${vector})*|${plainSize})`;
const sizeList = String.raw`${size}(?:\s*,\s*${size})*`;
const onSizes = new RegExp(String.raw`\bon\s+${sizeList}`);
const lastSize = new RegExp(String.raw`(${size})([ \t]*(?:#.*)?)$`);
const customSize = new RegExp(String.raw`^([ \t]+size[ \t]+)${size}`, 'm');

/** Audits that say their sizes themselves, by `on`. */
const sized = new Set(['laws', 'spectrum', 'degeneracy', 'expect', 'scan', 'count']);

interface Statement {
  /** First line, from 1, and the line after its last. */
  readonly first: number;
  readonly end: number;
  readonly keyword: string;
}

/** A statement starts in column 1 with its keyword; indented, blank and comment lines do not begin one. */
function statementsOf(lines: readonly string[]): Statement[] {
  const starts = lines.flatMap((line, at) => {
    const keyword = /^[^\s#]\S*/.exec(line)?.[0];
    return keyword === undefined ? [] : [{ at, keyword }];
  });
  return starts.map(({ at, keyword }, k) => ({
    first: at + 1,
    end: (starts[k + 1]?.at ?? lines.length) + 1,
    keyword,
  }));
}

/**
 * Leaves, of all audits of a text, the one at a line, and gives it other sizes or other values of couplings. Every line keeps its
 * number. Works on the text, by the layout of the language; what the language does not allow shows as a problem of the result.
 */
export function varyText(text: string, line: number, { sizes, couplings }: Variation): Varied {
  const lines = text.split('\n');
  const statements = statementsOf(lines);
  const asked = statements.find(({ first, end }) => first <= line && line < end);
  if (asked?.keyword !== 'audit') return { fault: 'There is no audit at the line of this claim.' };
  const parts = new Map(statements.map((one) => [one, lines.slice(one.first - 1, one.end - 1).join('\n')]));
  for (const [one, own] of parts) {
    if (one.keyword === 'audit' && one !== asked) parts.set(one, own.replace(/[^\n]+/g, '#'));
  }
  for (const [name, value] of Object.entries(couplings ?? {})) {
    if (!setCoupling(parts, name, value)) return { fault: `There is no coupling ${name}.` };
  }
  if (sizes !== undefined) {
    const fault = setSizes(parts, asked, sizes);
    if (fault !== null) return { fault };
  }
  const head = lines.slice(0, (statements[0]?.first ?? 1) - 1);
  return { text: [...head, ...parts.values()].join('\n') };
}

function setCoupling(parts: Map<Statement, string>, name: string, value: string): boolean {
  const escaped = name.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
  const declared = new RegExp(
    String.raw`(?<=^couplings\s(?:[^#]*?[,\s])??)${escaped}(?=\s*(?:[=,#]|$))(\s*=\s*[^,#\n]*)?`,
  );
  for (const [one, own] of parts) {
    if (one.keyword !== 'couplings' || !declared.test(own)) continue;
    parts.set(one, own.replace(declared, `${name} = ${value}`));
    return true;
  }
  return false;
}

function setSizes(parts: Map<Statement, string>, asked: Statement, sizes: readonly string[]): string | null {
  const own = parts.get(asked) ?? '';
  if (onSizes.test(own)) {
    parts.set(asked, own.replace(onSizes, `on ${sizes.join(', ')}`));
    return null;
  }
  const [, audit = ''] = /^audit\s+(\w+)/.exec(own) ?? [];
  if (sized.has(audit)) {
    const [first = '', ...rest] = own.split('\n');
    const bare = first.replace(/\s*(#.*)?$/, '');
    parts.set(asked, [`${bare} on ${sizes.join(', ')}`, ...rest].join('\n'));
    return null;
  }
  const [one, ...more] = sizes;
  if (one === undefined || more.length > 0)
    return `The audit ${audit} is decided at the size of the lattice: name one size.`;
  for (const [statement, declared] of parts) {
    if (statement.keyword !== 'lattice') continue;
    const [head = '', ...rest] = declared.split('\n');
    if (/^lattice\s+custom\b/.test(head)) parts.set(statement, declared.replace(customSize, `$1${one}`));
    else parts.set(statement, [head.replace(lastSize, `${one}$2`), ...rest].join('\n'));
    return null;
  }
  return 'There is no lattice.';
}
