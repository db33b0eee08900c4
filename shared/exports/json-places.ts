/** Where things stand in a JSON text, and where it stops being one (RFC 8259): what JSON.parse does not say. */

export interface JsonPlaces {
  /** Offset of each value by its path: "", "/title", "/entries/0/text". */
  readonly places: ReadonlyMap<string, number>;
  /** The first place where the text is no JSON; null if it is. */
  readonly fault: { readonly at: number; readonly message: string } | null;
}

class Fault extends Error {
  readonly at: number;
  constructor(at: number, message: string) {
    super(message);
    this.at = at;
  }
}

/** Deeper nesting is a fault, so that no text overflows the stack. */
const deepest = 200;
const space = /[ \t\n\r]*/y;
const numberForm = /-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/y;
// eslint-disable-next-line no-control-regex -- JSON forbids control characters in strings
const stringForm = /"(?:[^"\\\u0000-\u001f]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/y;

export function jsonPlaces(text: string): JsonPlaces {
  const places = new Map<string, number>();
  let at = 0;
  const take = (form: RegExp): string | null => {
    form.lastIndex = at;
    const found = form.exec(text)?.[0] ?? null;
    if (found !== null) at += found.length;
    return found;
  };
  const skip = (): void => void take(space);
  const fail = (message: string): never => {
    throw new Fault(at, message);
  };
  const expect = (character: string, where: string): void => {
    skip();
    if (text[at] !== character) fail(`"${character}" is expected ${where}`);
    at += 1;
  };
  const string = (): string => {
    const found = take(stringForm);
    return found === null ? fail('a string in double quotes is expected, without line breaks in it') : found;
  };
  const list = (end: string, path: string, item: (index: number) => void): void => {
    at += 1;
    skip();
    if (text[at] === end) {
      at += 1;
      return;
    }
    for (let index = 0; ; index += 1) {
      skip();
      item(index);
      skip();
      if (text[at] === end) break;
      if (text[at] !== ',') fail(`"," or "${end}" is expected in ${path === '' ? 'the outermost value' : path}`);
      at += 1;
    }
    at += 1;
  };
  const value = (path: string, depth: number): void => {
    skip();
    places.set(path, at);
    if (depth > deepest) fail('this is nested too deeply');
    const first = text[at];
    if (first === '{') {
      list('}', path, () => {
        const key = JSON.parse(string()) as string;
        expect(':', 'after a name');
        value(`${path}/${key}`, depth + 1);
      });
    } else if (first === '[') list(']', path, (index) => value(`${path}/${String(index)}`, depth + 1));
    else if (first === '"') string();
    else if (take(numberForm) === null) {
      const word = ['true', 'false', 'null'].find((one) => text.startsWith(one, at));
      if (word === undefined) fail(at >= text.length ? 'the text ends too early' : 'a value is expected');
      else at += word.length;
    }
  };
  try {
    value('', 0);
    skip();
    if (at < text.length) fail('the text goes on after its value');
    return { places, fault: null };
  } catch (error) {
    if (!(error instanceof Fault)) throw error;
    return { places, fault: { at: error.at, message: error.message } };
  }
}

/** Line and column of an offset, from 1. */
export function lineOf(text: string, at: number): { readonly line: number; readonly column: number } {
  const before = text.slice(0, at);
  return { line: before.split('\n').length, column: at - before.lastIndexOf('\n') };
}
