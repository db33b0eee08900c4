import { newDerivation } from '../../shared/derivation/derive.ts';

/**
 * How long the engine, as the browser's worker runs it, takes to carry a model of twenty sums through a map, with the proofs of the map and of the
 * law of its image, on each built-in lattice: through a dictionary, and by gauging. Everything is new in each run. Goal: 200 ms.
 */

export interface MapFigures {
  readonly lattice: string;
  readonly map: string;
  /** Translation families of the image. */
  readonly families: number;
  /** Milliseconds: the very first run, and the median and worst of the runs after it. */
  readonly first: number;
  readonly median: number;
  readonly worst: number;
}

const lattices: Readonly<Record<string, string>> = {
  chain: '8',
  square: '4 x 4',
  triangular: '4 x 4',
  honeycomb: '4 x 4',
  kagome: '3 x 3',
  cubic: '3 x 3 x 3',
};

const maps = {
  bonds: {
    text: `map bonds from s to g
  s^z[l.a] s^z[l.b] => g^z[l]                   for l: links
  s^x[v]            => prod(l: star(v)) g^x[l]  for v: vertices`,
    law: 'flat',
  },
  minimal: { text: 'map minimal = gauge flip with g on links', law: 'minimal.gauss' },
} as const;

/** Twenty sums: exchange and field, pairs up to the third shell, and products of these. */
function source(lattice: string, size: string, map: keyof typeof maps, run: number): string {
  const terms = Array.from({ length: 20 }, (_, k) => {
    const weight = `${String(k + 1)}/${String(20 + run)} J`;
    const bond = 's^z[l.a] s^z[l.b]';
    const kinds = [
      `sum(l: links) ${bond}`,
      'sum(v: vertices) s^x[v]',
      `sum(l: links) s^x[l.a] s^x[l.b]`,
      `sum(l: links) s^y[l.a] s^y[l.b]`,
      `sum(l: links) s^x[l.a] ${bond} s^x[l.b]`,
      'sum(v: vertices) s^x[v] prod(u: neighbours(v)) s^x[u]',
      'sum(t: pairs(2)) s^z[t.a] s^z[t.b]',
      'sum(t: pairs(2)) s^x[t.a] s^x[t.b]',
      'sum(t: pairs(2)) s^y[t.a] s^y[t.b]',
      'sum(t: pairs(3)) s^z[t.a] s^z[t.b]',
    ];
    return `  - ${weight} ${kinds[k % kinds.length] ?? ''}`;
  });
  return `lattice ${lattice} torus ${size}
spins s on vertices
spins g on links
couplings J = 1
symmetry flip = prod(v: vertices) s^x[v]
law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]
${maps[map].text}
model magnet =
${terms.join('\n')}
model image = ${map}(magnet)
audit map ${map}
audit commute image with ${maps[map].law}
`.replace(lattice === 'chain' ? /^(law flat|.*with flat).*$/gmu : /$^/u, '');
}

export function measureMaps(runs = 12): readonly MapFigures[] {
  const kinds = ['bonds', 'minimal'] as const;
  return Object.entries(lattices).flatMap(([lattice, size]) =>
    kinds.map((map) => {
      const times: number[] = [];
      let families = 0;
      for (let run = 0; run < runs; run += 1) {
        const derivation = newDerivation();
        const start = performance.now();
        const report = derivation.derive(source(lattice, size, map, run));
        times.push(performance.now() - start);
        if (report.problems.length > 0 || report.claims.some(({ grade }) => grade === 'refuted' || grade === 'open'))
          throw new Error(`${lattice}: ${JSON.stringify([report.problems, report.claims])}`);
        families = report.models['image']?.terms.length ?? 0;
      }
      const [first = NaN, ...warm] = times;
      const sorted = warm.sort((a, b) => a - b);
      const median = sorted[Math.floor(sorted.length / 2)] ?? NaN;
      return { lattice, map, families, first, median, worst: sorted.at(-1) ?? NaN };
    }),
  );
}
