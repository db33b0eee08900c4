/** Thrown where a value has no canonical form; `path` is a JSON pointer to the offending place. */
export class NoCanonicalForm extends Error {
  readonly path: string;
  constructor(path: string, reason: string) {
    super(`no canonical JSON at "${path}": ${reason}`);
    this.name = 'NoCanonicalForm';
    this.path = path;
  }
}

/**
 * The canonical JSON text of a value: no white space, keys in order of their UTF-16 code units, numbers and strings
 * as ECMAScript writes them. Equal values have equal texts, so the text can be hashed.
 * Source: RFC 8785, JSON Canonicalization Scheme, sections 3.2.2 and 3.2.3.
 * Throws NoCanonicalForm for what I-JSON (RFC 7493) leaves out: NaN, infinities, lone surrogates, undefined, functions, bigints.
 * A key whose value is undefined is left out, as JSON.stringify does.
 */
export function canonical(value: unknown, path = ''): string {
  if (value === null || typeof value === 'boolean') return String(value);
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new NoCanonicalForm(path, 'not a finite number');
    return JSON.stringify(value);
  }
  if (typeof value === 'string') return canonicalString(value, path);
  if (Array.isArray(value)) return `[${value.map((item, at) => canonical(item, `${path}/${String(at)}`)).join(',')}]`;
  if (typeof value === 'object') return canonicalObject(value, path);
  throw new NoCanonicalForm(path, `${typeof value} is not a JSON value`);
}

function canonicalString(value: string, path: string): string {
  // With the u flag a surrogate matches only where it has no partner.
  if (/\p{Surrogate}/u.test(value)) throw new NoCanonicalForm(path, 'lone surrogate');
  return JSON.stringify(value);
}

function canonicalObject(value: object, path: string): string {
  const members = Object.entries(value)
    .filter(([, member]) => member !== undefined)
    // The < of strings compares UTF-16 code units, which is the order that RFC 8785 section 3.2.3 asks for.
    .sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0))
    .map(([key, member]) => `${canonicalString(key, path)}:${canonical(member, `${path}/${key}`)}`);
  return `{${members.join(',')}}`;
}
