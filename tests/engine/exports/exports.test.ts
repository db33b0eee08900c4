import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { notebookFileSchema, notebookJsonSchema } from '../../../shared/contracts/exchange.ts';
import { onCluster } from '../../../shared/derivation/cluster.ts';
import { newDerivation } from '../../../shared/derivation/derive.ts';
import { article } from '../../../shared/exports/article.ts';
import { bibtex, citationFile } from '../../../shared/exports/citation.ts';
import { matrixMarket } from '../../../shared/exports/matrix-market.ts';
import { notebookJson } from '../../../shared/exports/notebook-json.ts';
import { openQasm } from '../../../shared/exports/openqasm.ts';
import { pauliCsv } from '../../../shared/exports/pauli-csv.ts';
import { readUpload } from '../../../shared/exports/upload.ts';
import { joinEntries } from '../../../shared/notebook/text.ts';

const source = `lattice chain torus 5
spins s on vertices
couplings J = 1/2, h = 0.6, D = 0.25
model m = - J sum(l: links) s^z[l.a] s^z[l.b] - h sum(v: vertices) s^x[v] + D sum(l: links) s^x[l.a] s^y[l.b] + 3/4
map c = circuit
  h s[v] for v: vertices
  cz s[l.a] s[l.b] for l: links
`;
function modelOf(text: string, size: string | null = null) {
  const found = onCluster(text, { what: 'model', name: null, size });
  if (!('model' in found)) throw new Error(JSON.stringify(found));
  return found.model;
}
const lowest = (text: string): unknown => newDerivation().derive(text).claims[0]?.figures.energy;
const scipy = spawnSync('python3', ['-c', 'import scipy.io']).status === 0;

describe('a model on a cluster', () => {
  it('read back from its Pauli strings has the same ground energy', () => {
    const { entries, faults } = readUpload({ source: pauliCsv(modelOf(source)) });
    expect(faults).toEqual([]);
    const { text } = joinEntries(entries);
    const [mine, theirs] = [lowest(`${source}audit degeneracy m`), lowest(`${text}audit degeneracy read`)];
    expect(typeof mine).toBe('number');
    expect(theirs).toBeCloseTo(Number(mine), 9);
  });

  it('as Matrix Market is the matrix that its strings are, entry by entry', () => {
    const model = modelOf(source, '3');
    const written = matrixMarket(model);
    const lines =
      'text' in written
        ? written.text
            .trim()
            .split('\n')
            .filter((line) => !line.startsWith('%'))
        : [];
    const [size = ''] = lines;
    expect(size.split(' ')[0]).toBe('8');
    const found = new Map(
      lines.slice(1).map((line) => [line.split(' ').slice(0, 2).join(' '), line.split(' ').slice(2).map(Number)]),
    );
    // Kronecker products, letter by letter.
    const letters = {
      I: [
        [1, 0],
        [0, 1],
      ],
      X: [
        [0, 1],
        [1, 0],
      ],
      Z: [
        [1, 0],
        [0, -1],
      ],
    } as Record<string, number[][]>;
    for (let i = 0; i < 8; i += 1) {
      for (let j = 0; j <= i; j += 1) {
        let re = 0;
        let im = 0;
        for (const { re: a, paulis } of model.strings) {
          let value = a;
          let turns = 0;
          for (let site = 0; site < 3; site += 1) {
            const letter = paulis.find((one) => one.site === site)?.letter ?? 'I';
            const [row, column] = [(i >> (2 - site)) & 1, (j >> (2 - site)) & 1];
            // Y has -i above the diagonal and i below.
            if (letter === 'Y') turns += row === column ? NaN : row === 1 ? 1 : 3;
            else value *= letters[letter]?.[row]?.[column] ?? 0;
          }
          if (Number.isNaN(turns)) continue;
          re += value * ([1, 0, -1, 0][turns % 4] ?? 0);
          im += value * ([0, 1, 0, -1][turns % 4] ?? 0);
        }
        const [x = 0, y = 0] = found.get(`${String(i + 1)} ${String(j + 1)}`) ?? [];
        expect([x, y].map((n) => n + 0)).toEqual([expect.closeTo(re, 12), expect.closeTo(im, 12)]);
      }
    }
  });

  it.skipIf(!scipy)('as Matrix Market has, for SciPy, the ground energy of the engine', () => {
    const folder = mkdtempSync(join(tmpdir(), 'mtx-'));
    try {
      const written = matrixMarket(modelOf(source));
      writeFileSync(join(folder, 'm.mtx'), 'text' in written ? written.text : '');
      const program =
        'import sys,scipy.io,numpy; m=scipy.io.mmread(sys.argv[1]).toarray(); print(abs(m-m.conj().T).max(), numpy.linalg.eigvalsh(m)[0])';
      const [skew, energy] = execFileSync('python3', ['-c', program, join(folder, 'm.mtx')])
        .toString()
        .trim()
        .split(' ');
      expect(Number(skew)).toBe(0);
      expect(Number(energy)).toBeCloseTo(Number(lowest(`${source}audit degeneracy m`)), 9);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });

  it('says why there is none', () => {
    const fault = (text: string, asked: { name?: string; size?: string }) =>
      onCluster(text, { what: 'model', name: asked.name ?? null, size: asked.size ?? null });
    expect(fault(source, { name: 'q' })).toEqual({ fault: 'there is no model q; there is m.' });
    expect(fault(source, { size: 'x' })).toHaveProperty('fault');
    expect(fault('spins s on vertices', {})).toEqual({ fault: 'no lattice is declared.' });
    expect(fault(source.replace('h = 0.6', 'h'), {})).toEqual({ fault: 'no value for h.' });
  });
});

describe('a circuit', () => {
  it('is written gate by gate in OpenQASM 3', () => {
    const found = onCluster(source, { what: 'circuit', name: 'c', size: '3' });
    const lines = 'circuit' in found ? openQasm(found.circuit).split('\n') : [];
    expect(lines.slice(0, 2)).toEqual(['OPENQASM 3.0;', 'include "stdgates.inc";']);
    expect(lines.filter((line) => /^(h|cz|qubit)/.test(line))).toEqual([
      'qubit[3] q;',
      ...['h q[0];', 'h q[1];', 'h q[2];'],
      ...['cz q[0], q[1];', 'cz q[1], q[2];', 'cz q[2], q[0];'],
    ]);
  });
});

describe('files', () => {
  const entries = [
    {
      kind: 'prose' as const,
      text: '# A "title" & 100 %\n\nWith $\\sigma^z$, `a_b` and **bold** _words_ {x} \\end{document} ⟨s⟩ 漢.',
    },
    { kind: 'statements' as const, text: source.trimEnd() },
  ];
  const content = { title: 'Rings & $things$', authors: ['Rana Okafor', 'Åsa Lindqvist_B'], entries };

  it('in JSON come back as they were, and fit the schema that is published', () => {
    const text = notebookJson({ format: 'gaugewright-notebook/1', ...content, edition: null, report: null });
    expect(readUpload({ source: text })).toMatchObject({ form: 'json', ...content, faults: [] });
    expect(notebookFileSchema.safeParse(JSON.parse(text)).success).toBe(true);
    expect(notebookJsonSchema()).toMatchObject({ type: 'object', required: ['format', 'title', 'entries'] });
  });

  it.each([
    ['{\n  "format": "gaugewright-notebook/1",\n  "title": 3,\n  "entries": []\n}', 3, 12],
    ['{\n  "format": "gaugewright-notebook/1"\n  "title": "x"\n}', 3, 3],
    ['{ "format": "gaugewright-notebook/1", "title": "x",\n "entries": [ { "kind": "poem", "text": "" } ] }', 2, 25],
    ['re,im,paulis\n1,0,X0\nx,0,Z1\n', 3, 1],
    ['re,im,paulis\n1,0.5,X0\n', 2, 3],
    ['1,X0 Q2\n', 1, 3],
    ['1,X0 Z0\n', 1, 3],
  ])('that are wrong are told by line and column: %j', (text, line, column) => {
    const [fault] = readUpload({ source: text }).faults;
    expect([fault?.line, fault?.column]).toEqual([line, column]);
  });

  it('as an article balance their environments, and let no text of people out', () => {
    const report = newDerivation().derive(joinEntries(entries).text);
    const tex = article({ content, report, edition: null });
    const open: string[] = [];
    for (const [, what, name] of tex.matchAll(/\\(begin|end)\{(\w+\*?)\}/g)) {
      if (what === 'begin') open.push(name ?? '');
      else expect(open.pop()).toBe(name);
    }
    expect(open).toEqual([]);
    expect(tex.match(/\\end\{document\}/g)).toHaveLength(1);
    expect(tex).toContain('\\title{Rings \\& \\$things\\$}');
    expect(tex).toContain('\\ensuremath{\\langle}s\\ensuremath{\\rangle} [U+6F22]');
  });

  it('that cite an edition name it', () => {
    const cited = {
      ...content,
      edition: 2,
      hash: 'ab',
      publishedAt: '2026-03-04T05:06:07.000Z',
      address: 'https://x.example/e',
    };
    expect(bibtex(cited)).toContain('@misc{okafor2026e2,\n  author = {Okafor, Rana and Lindqvist\\_B, Åsa},');
    expect(bibtex(cited)).toContain('month = mar,');
    expect(citationFile(cited)).toContain('  - family-names: "Okafor"\n    given-names: "Rana"');
    expect(citationFile(cited)).toContain('date-released: 2026-03-04');
  });
});
