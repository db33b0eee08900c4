import { mkdtempSync, mkdirSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import { ESLint, Linter } from 'eslint';
import tseslint from 'typescript-eslint';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { arrows, objection, zoneOf } from '../../.lint/arrows.mjs';
import { table } from '../../eslint.config.js';
import { root } from '../../server/commands/root.mjs';

const sources = (folder: string): string[] =>
  readdirSync(join(root, folder), { withFileTypes: true, recursive: true })
    .filter((entry) => entry.isFile() && /\.(ts|tsx)$/.test(entry.name))
    .map((entry) => relative(root, join(entry.parentPath, entry.name)))
    .filter((path) => !path.includes('/assembly/'));

describe('the table of arrows', () => {
  test.each([
    ['shared/lattice/cells.ts', '../algebra/f2/bits.ts'],
    ['shared/lattice/cells.ts', 'node:fs'],
    ['shared/lattice/cells.ts', 'zod'],
    ['shared/algebra/pauli/family.ts', '../finite/string.ts'],
    ['shared/algebra/f2/bits.ts', '../numbers/surd.ts'],
    ['shared/language/check.ts', '../maps/registry.ts'],
    ['shared/language/expand.ts', '../algebra/finite/wrap.ts'],
    ['shared/typeset/roles.ts', '../maps/registry.ts'],
    ['shared/typeset/operators.ts', '../../grammar/lexer.ts'],
    ['shared/derivation/derive.ts', '../spectra/solvers/lanczos.ts'],
    ['shared/derivation/derive.ts', '../repairs/registry.ts'],
    ['shared/checker/check.ts', '../algebra/f2/bits.ts'],
    ['shared/audits/commute.ts', '../../server/settings.ts'],
    ['shared/audits/commute.ts', '../../src/hand/hand.ts'],
    ['server/routes/editions.ts', '../db/queries/editions.ts'],
    ['server/services/editions.ts', '../../shared/derivation/derive.ts'],
    ['server/services/editions.ts', '../../src/api/client.ts'],
    ['server/commands/check.ts', '../../shared/derivation/derive.ts'],
    ['src/features/plate/plate.tsx', '../margin/margin.tsx'],
    ['src/features/margin/margin.tsx', '../../../shared/lattice/drawing.ts'],
    ['src/features/spread/spread.tsx', '../../../shared/derivation/derive.ts'],
    ['src/components/marks.tsx', '../api/client.ts'],
    ['src/components/marks.tsx', 'node:fs'],
    ['src/routes/notebook.tsx', '../../server/rights.ts'],
    ['nowhere/file.ts', 'zod'],
  ])('%s may not import %s', (from, specifier) => {
    expect(objection(table, from, specifier)).toContain('"');
  });

  test.each([
    ['shared/contracts/report.ts', 'zod'],
    ['shared/algebra/finite/wrap.ts', '../pauli/family.ts'],
    ['shared/typeset/operators.ts', '../../grammar/words.ts'],
    ['shared/audits/registry.ts', './commute.ts'],
    ['server/index.ts', './app.ts'],
    ['server/db/connection.ts', 'node:fs'],
    ['src/features/plate/plate.tsx', '../../../shared/lattice/drawing.ts'],
    ['src/features/plate/plate.tsx', './flat.tsx'],
    ['src/worker/worker.ts', '../../shared/derivation/derive.ts'],
    ['src/components/formula.tsx', 'katex/dist/katex.min.css'],
  ])('%s may import %s', (from, specifier) => {
    expect(objection(table, from, specifier)).toBeUndefined();
  });

  test('the checker takes types of a certificate, and nothing else of it', () => {
    const asked = ['shared/checker/check.ts', '../contracts/certificate.ts'] as const;
    expect(objection(table, ...asked, true)).toBeUndefined();
    expect(objection(table, ...asked, false)).toContain('only types');
  });

  test('every source file stands in a zone', () => {
    const files = ['grammar', 'shared', 'server', 'src']
      .filter((name) => readdirSync(root).includes(name))
      .flatMap(sources);
    expect(files.length).toBeGreaterThan(5);
    expect(files.filter((file) => !zoneOf(table, file))).toEqual([]);
  });
});

describe('the rule', () => {
  let folder = '';
  const write = (name: string, text: string) => writeFileSync(join(folder, name), text);
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'arrows-'));
    mkdirSync(join(folder, 'a'));
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  test('finds a circle of files, also through types, and names its path', () => {
    write('a/one.ts', "import { two } from './two.ts';\nexport const one = two;\n");
    write('a/two.ts', "import type { three } from './three.ts';\nexport const two: typeof three = 1;\n");
    write('a/three.ts', "export { one as three } from './one.ts';\n");
    const linter = new Linter({ cwd: folder });
    const verify = (text: string) =>
      linter.verify(
        text,
        [
          {
            files: ['**/*.ts'],
            languageOptions: { parser: tseslint.parser },
            plugins: { house: { rules: { arrows } } },
            rules: { 'house/arrows': ['error', { a: {} }] },
          },
        ] as Linter.Config[],
        join(folder, 'a', 'one.ts'),
      );
    const [found, ...more] = verify("import { two } from './two.ts';\nexport const one = two;\n");
    expect(more).toEqual([]);
    expect(found?.message).toContain('a/one.ts > a/two.ts > a/three.ts > a/one.ts');
    write('a/three.ts', 'export const three = 1;\n');
    expect(verify("import { two } from './two.ts';\nexport const one = two;\n")).toEqual([]);
  });

  test('the configuration reports forbidden imports, frames, clocks and settings where they stand', async () => {
    const eslint = new ESLint({ cwd: root });
    const lines = [
      "import express from 'express';",
      "export { root } from '../server/commands/root.mjs';",
      'export const now = (): number => Date.now();',
      'export const chance = (): number => Math.random();',
      'export const secret = (): unknown => express(process.env.SECRET);',
    ];
    const [result] = await eslint.lintText(lines.join('\n'), { filePath: join(root, 'shared', 'limits.ts') });
    const found = result?.messages.map(({ line, ruleId }) => `${line} ${ruleId}`) ?? [];
    expect(found).toEqual(
      expect.arrayContaining([
        '1 house/arrows',
        '2 house/arrows',
        '3 no-restricted-globals',
        '4 no-restricted-properties',
        '5 no-restricted-syntax',
        '5 no-restricted-globals',
      ]),
    );
  });
});
