/**
 * An ESLint rule that holds every import of a source file against a table of allowed arrows.
 * A zone is a folder (or a file, without its ending); a `*` in it stands for any one name, and each name makes a zone
 * of its own. The longest zone that contains a file is the file's. Inside its zone a file imports freely; beyond it only
 * what the zone's row lists. Imports that close a circle of files are errors everywhere.
 */
import { existsSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative, sep } from 'node:path';
import ts from 'typescript';

const endings = /\.(tsx?|mjs|js|css|ne|json|wasm)$/;

/** `src/features/plate/flat.tsx` → `src/features/plate/flat`, and the same without a trailing `/index`. */
const bare = (path) => path.replace(endings, '').replace(/\.(grammar|d)$/, '');

/** Whether `path` is `pattern` or lies in it; returns the part of `path` that `pattern` covers, else undefined. */
function covered(pattern, path) {
  const wanted = pattern.split('/');
  const given = path.split('/');
  if (given.length < wanted.length) return undefined;
  return wanted.every((word, k) => word === '*' || word === given[k])
    ? given.slice(0, wanted.length).join('/')
    : undefined;
}

/** The most particular row of the table for a path, with the concrete folder it stands for there. */
export function zoneOf(table, path) {
  let best;
  for (const [pattern, row] of Object.entries(table)) {
    const home = covered(pattern, bare(path));
    if (home === undefined) continue;
    const depth = pattern.split('/').length;
    if (!best || depth > best.depth || (depth === best.depth && !pattern.includes('*')))
      best = { pattern, home, row, depth };
  }
  return best;
}

/** The package of a bare specifier: `@codemirror/view`, `katex` for `katex/dist/katex.min.css`, `node:` for built-ins. */
function packageOf(specifier) {
  if (specifier.startsWith('node:')) return 'node:';
  const words = specifier.split('/');
  return specifier.startsWith('@') ? words.slice(0, 2).join('/') : words[0];
}

/** Why `from` may not import `specifier`, or undefined when it may. Paths are relative to the checkout, with `/`. */
export function objection(table, from, specifier, typesOnly = false) {
  const zone = zoneOf(table, from);
  if (!zone) return `"${from}" stands in no zone of the table of arrows; give its folder a row in eslint.config.js`;
  const { row, home, pattern } = zone;
  if (!specifier.startsWith('.')) {
    const name = packageOf(specifier);
    const allowed = row.packages ?? [];
    const any = allowed.includes('*') && (name !== 'node:' || allowed.includes('node:'));
    return any || allowed.includes(name) ? undefined : `"${pattern}" may not import the package "${name}"`;
  }
  const target = bare(join(dirname(from), specifier.replace(/\?.*$/, '')).split(sep).join('/'));
  if (covered(home, target) === home) return undefined;
  const hit = (list = []) => list.some((entry) => covered(entry, target) !== undefined);
  if (hit(row.never)) return `"${pattern}" may never import "${target}"`;
  if (hit(row.may)) return undefined;
  if (hit(row.types)) return typesOnly ? undefined : `"${pattern}" may import only types from "${target}"`;
  return `"${pattern}" may not import "${target}"; its row in eslint.config.js does not list it`;
}

const links = new Map();

/** The files that a file imports by relative path, absolute; read once for each time the file changed. */
function importsOf(file) {
  const changed = statSync(file).mtimeMs;
  const known = links.get(file);
  if (known?.changed === changed) return known.files;
  const files = ts
    .preProcessFile(readFileSync(file, 'utf8'), true, true)
    .importedFiles.map(({ fileName }) => fileName.replace(/\?.*$/, ''))
    .filter((name) => name.startsWith('.') && /\.(tsx?|mjs|js)$/.test(name))
    .map((name) => join(dirname(file), name))
    .filter((path) => existsSync(path));
  links.set(file, { changed, files });
  return files;
}

/** The shortest chain of imports from `start` to `goal` (both absolute), or undefined. */
function chain(start, goal) {
  const before = new Map([[start, undefined]]);
  const queue = [start];
  for (const file of queue) {
    if (file === goal) {
      const steps = [];
      for (let at = file; at !== undefined; at = before.get(at)) steps.unshift(at);
      return steps;
    }
    for (const next of importsOf(file)) {
      if (before.has(next)) continue;
      before.set(next, file);
      queue.push(next);
    }
  }
  return undefined;
}

export const arrows = {
  meta: {
    type: 'problem',
    schema: [{ type: 'object' }],
    messages: { arrow: '{{ why }}.', circle: 'This import closes a circle: {{ path }}.' },
  },
  create(context) {
    const [table] = context.options;
    const file = context.filename;
    const from = relative(context.cwd, file).split(sep).join('/');
    const check = (node, source, typesOnly) => {
      if (source?.type !== 'Literal' || typeof source.value !== 'string') return;
      const why = objection(table, from, source.value, typesOnly);
      if (why) context.report({ node: source, messageId: 'arrow', data: { why } });
      if (!source.value.startsWith('.')) return;
      const target = join(dirname(file), source.value.replace(/\?.*$/, ''));
      if (!/\.(tsx?|mjs|js)$/.test(target) || !existsSync(target)) return;
      const steps = chain(target, file);
      if (!steps) return;
      const path = [file, ...steps].map((step) => relative(context.cwd, step).split(sep).join('/')).join(' > ');
      context.report({ node: source, messageId: 'circle', data: { path } });
    };
    const onlyTypes = (node) =>
      node.importKind === 'type' ||
      node.exportKind === 'type' ||
      (node.specifiers?.length > 0 && node.specifiers.every((one) => (one.importKind ?? one.exportKind) === 'type'));
    return {
      ImportDeclaration: (node) => check(node, node.source, onlyTypes(node)),
      ExportNamedDeclaration: (node) => check(node, node.source, onlyTypes(node)),
      ExportAllDeclaration: (node) => check(node, node.source, onlyTypes(node)),
      ImportExpression: (node) => check(node, node.source, false),
      TSImportType: (node) => check(node, node.source ?? node.argument?.literal ?? node.argument, true),
    };
  },
};
