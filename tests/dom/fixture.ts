import { builtInFamily } from '../../shared/lattice/built-in.ts';
import type { Claim, Report, ReportModel } from '../../shared/contracts/report.ts';

/** A report as the engine gives it, written by hand for tests of the page's state: two models, a map, a law, claims. */

const families = (species: string, cell: string, paulis: string) =>
  [...paulis].map((pauli) => ({ species, cell, offset: [0, 0], pauli: pauli as 'x' | 'y' | 'z' }));

const term = (group: number, tex: string, orbit: ReturnType<typeof families>) => ({
  coefficient: '-1',
  tex,
  kind: 'other' as const,
  orbit,
  steps: [1, 1],
  spoken: tex,
  group,
  piece: group,
});

const lineOf = (text: string, start: string): number => {
  const found = text.split('\n').findIndex((line) => line.startsWith(start));
  return found + 1;
};

export function isingModel(line: number): ReportModel {
  return {
    terms: [
      term(0, 's^z s^z', [
        { species: 's', cell: 'vertices', offset: [0, 0], pauli: 'z' },
        { species: 's', cell: 'vertices', offset: [1, 0], pauli: 'z' },
      ]),
      term(1, 's^x', families('s', 'vertices', 'x')),
    ],
    groups: [
      {
        tex: '-J \\sum_{l} \\pz{s^{z}_{a}}\\, \\pz{s^{z}_{b}}',
        kind: 'Ising exchange',
        spoken: 'minus J times the sum over links l of s z at a, s z at b',
        place: { line: line + 1, column: 3, length: 35 },
      },
      {
        tex: '-h \\sum_{v} \\px{s^{x}_{v}}',
        kind: 'transverse field',
        spoken: 'minus h times the sum over vertices v of s x at v',
        place: { line: line + 2, column: 3, length: 27 },
      },
    ],
    tex: '-J\\sum s^z s^z - h\\sum s^x',
    spoken: 'the Ising model',
    constant: '0',
    line,
    species: ['s'],
    language: 'spin',
    image: null,
  };
}

export function gaugeModel(line: number): ReportModel {
  return {
    terms: [
      term(0, 'g^z', families('g', 'links.1', 'z')),
      term(1, 'g^x g^x g^x g^x', [
        { species: 'g', cell: 'links.1', offset: [0, 0], pauli: 'x' },
        { species: 'g', cell: 'links.2', offset: [0, 0], pauli: 'x' },
        { species: 'g', cell: 'links.1', offset: [-1, 0], pauli: 'x' },
        { species: 'g', cell: 'links.2', offset: [0, -1], pauli: 'x' },
      ]),
    ],
    groups: [
      {
        tex: '-J \\sum_{l} \\pz{g^{z}_{l}}',
        kind: 'electric',
        spoken: 'minus J times the sum over links l of g z at l',
        place: { line, column: 15, length: 12 },
      },
      {
        tex: '-h \\sum_{v} \\prod_{l \\ni v} \\px{g^{x}_{l}}',
        kind: 'star',
        spoken: 'minus h times the sum over vertices v of the product over the star of v of g x',
        place: { line, column: 15, length: 12 },
      },
    ],
    tex: '-J\\sum g^z - h\\sum A',
    spoken: 'the gauge theory',
    constant: '0',
    line,
    species: ['g'],
    language: 'gauge',
    image: {
      map: 'bonds',
      of: 'ising',
      pairs: [
        [0, 0],
        [1, 1],
      ],
    },
  };
}

export const claim = (
  line: number,
  audit: string,
  subject: string,
  statement: string,
  grade: Claim['grade'],
): Claim => ({
  line,
  audit,
  subject,
  statement,
  tex: statement,
  grade,
  figures: {},
  witness: {},
  cautions: [],
  sources: [],
});

/** The report of whatever of this derivation is in a text; lines are found by the statements' first words. */
export function reportOf(text: string): Report {
  const at = (start: string) => lineOf(text, start);
  const report: Report = {
    format: 'gaugewright-report/1',
    engine: 'fixture',
    problems: [],
    lattice: {
      family: 'square',
      boundary: 'torus',
      periods: [
        [4, 0],
        [0, 4],
      ],
      geometry: builtInFamily('square'),
      species: { s: 'vertices', g: 'links' },
    },
    models: {},
    declarations: [],
    claims: [],
  };
  const declare = (
    what: Report['declarations'][number]['what'],
    name: string,
    tex: string,
    language: 'spin' | 'gauge' | 'both',
  ) => {
    const line = at(`${what} ${name}`);
    if (line > 0) report.declarations.push({ name, what, line, tex, spoken: tex, supports: [], language });
  };
  if (at('lattice') > 0) {
    const line = at('lattice');
    const setting = [
      ['lattice', 'square', '\\text{square lattice, } 4 \\times 4 \\text{ torus}'],
      ['spins', 's', 's \\text{ on vertices}'],
      ['spins', 'g', 'g \\text{ on links}'],
      ['couplings', 'J', 'J = 1'],
      ['couplings', 'h', 'h = 3/5'],
    ] as const;
    setting.forEach(([what, name, tex], k) =>
      report.declarations.push({
        name,
        what,
        line: line + Math.min(k, 3),
        tex,
        spoken: tex,
        supports: [],
        language: 'both',
      }),
    );
  }
  if (at('model ising') > 0) report.models['ising'] = isingModel(at('model ising'));
  if (at('model gauge') > 0) report.models['gauge'] = gaugeModel(at('model gauge'));
  declare('symmetry', 'flip', '\\prod_{v} \\px{s^{x}_{v}}', 'spin');
  declare('symmetry', 'w1', '\\prod_{l \\in \\ell_1} \\pz{g^{z}_{l}}', 'gauge');
  declare('symmetry', 'w2', '\\prod_{l \\in \\ell_2} \\pz{g^{z}_{l}}', 'gauge');
  declare('law', 'flat', '\\prod_{l \\in p} \\pz{g^{z}_{l}} = 1', 'gauge');
  if (at('map bonds') > 0)
    report.declarations.push({
      name: 'bonds',
      what: 'map',
      line: at('map bonds'),
      tex: '',
      spoken: 's z at a s z at b goes to g z at l; s x at v goes to the star of v',
      supports: [],
      language: 'both',
      rules: [
        {
          left: '\\pz{s^{z}_{a}}\\,\\pz{s^{z}_{b}}',
          right: '\\pz{g^{z}_{l}}',
          leftOrbit: [
            { species: 's', cell: 'vertices', offset: [0, 0], pauli: 'z' },
            { species: 's', cell: 'vertices', offset: [1, 0], pauli: 'z' },
          ],
          rightOrbit: families('g', 'links.1', 'z'),
        },
        {
          left: '\\px{s^{x}_{v}}',
          right: '\\prod_{l\\ni v}\\px{g^{x}_{l}}',
          leftOrbit: families('s', 'vertices', 'x'),
          rightOrbit: gaugeModel(1).terms[1]?.orbit ?? [],
        },
      ],
    });
  if (at('audit map bonds') > 0)
    report.claims.push(
      claim(
        at('audit map bonds'),
        'map',
        'bonds',
        'The map keeps all commutators, on tori of every size from 3 × 3 on.',
        'proved',
      ),
      claim(
        at('audit map bonds'),
        'map',
        'bonds',
        'Relations and signs on 2 × 2, 3 × 3, 4 × 4; holds for flip = +1 with flat, w1, w2 = +1.',
        'exact',
      ),
    );
  if (at('audit commute gauge') > 0)
    report.claims.push(
      claim(
        at('audit commute gauge'),
        'commute',
        'gauge',
        'Every term of gauge commutes with flat, at every size.',
        'proved',
      ),
    );
  if (at('audit spectrum') > 0)
    report.claims.push({
      ...claim(
        at('audit spectrum'),
        'spectrum',
        'ising',
        '8 levels agree on 3 × 3 within $3 \\cdot 10^{-13}$',
        'numerical',
      ),
      figures: {
        size: '3 x 3',
        left: [-19, -17, -16.9, -15, -14.2, -12],
        right: [-19, -17, -16.9, -15, -14.2, -12],
        maxDifference: 3e-13,
      },
      cautions: [
        'That the lowest levels agree is not equality of the spectra.',
        'A cluster this small shows no phase.',
      ],
    });
  if (at('audit commute biased') > 0)
    report.claims.push({
      ...claim(
        at('audit commute biased'),
        'commute',
        'biased',
        'biased does not commute with flip: 1 of 3 terms fails.',
        'refuted',
      ),
      witness: { words: 's^z at v anticommutes with flip: they differ on one spin' },
    });
  if (at('model biased') > 0) {
    const line = at('model biased');
    const ising = isingModel(line);
    report.models['biased'] = {
      ...ising,
      groups: [
        ...ising.groups,
        {
          tex: '-\\tfrac{1}{10} \\sum_{v} \\pz{s^{z}_{v}}',
          kind: 'other',
          spoken: 'minus one tenth',
          place: { line, column: 24, length: 10 },
        },
      ],
      terms: [...ising.terms, term(2, 's^z', families('s', 'vertices', 'z'))],
    };
    const refuted = report.claims.find((one) => one.subject === 'biased');
    if (refuted)
      refuted.figures = {
        terms: 3,
        commuting: 2,
        table: [0, 1, 2].map((k) => ({ term: k, law: 'flip', holds: k !== 2 })),
      };
  }
  const broken = text.split('\n').findIndex((line) => line.includes('s^z[l.a'.concat(' ')) || line.includes('spn'));
  if (broken >= 0) {
    report.problems.push({
      code: 'unclosed',
      message: 'This bracket is not closed.',
      line: broken + 1,
      column: 20,
      length: 7,
      hint: 'Add ] after l.a.',
      severity: 'error',
    });
    delete report.models['ising'];
    delete report.models['gauge'];
  }
  return report;
}
