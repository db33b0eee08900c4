import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { builtInFamilies, builtInFamily } from '../../shared/lattice/built-in.ts';
import { type Built, freeName, operatorText, pressed } from '../../src/features/plate/built.ts';
import { declaredWindow, frameOf, windowAbout } from '../../src/features/plate/frame.ts';
import { laidOver, meeting } from '../../src/features/plate/over.ts';
import { type PlateLattice, type Site, sitesOf } from '../../src/features/plate/supports.ts';
import { turned, turnedBy, usualView, viewByKey } from '../../src/features/plate/view.ts';
import { overRef } from '../../src/hand/hand.ts';
import { slicesOf } from '../../src/reading/slices.ts';
import { placed } from '../../src/reading/useReading.ts';

const familyOf = (name: string) => {
  const family = builtInFamily(name);
  if (!family) throw new Error(name);
  return family;
};

describe('an operator put together on the plate', () => {
  it('goes from nothing to X, Y, Z and back to nothing', () => {
    const spin = { species: 's', kind: 'vertices', index: 0, offset: [0, 0] } as const;
    let built: Built = new Map();
    const seen = [1, 2, 3, 4].map(() => {
      built = pressed(built, spin);
      return [...built.values()].map((site) => site.pauli).join('');
    });
    expect(seen).toEqual(['x', 'y', 'z', '']);
  });

  it('takes a name that is free', () => {
    expect(freeName(new Set())).toBe('W');
    expect(freeName(new Set(['W', 'W2']))).toBe('W3');
  });

  it.each([...builtInFamilies.keys()])(
    'is written as the engine reads it, on every kind of cell of the %s lattice',
    (name) => {
      const family = familyOf(name);
      const kinds = (['vertices', 'links', 'plaquettes'] as const).filter((kind) => family[kind].length > 0);
      const places = [0, 1].map((k) => family.vectors.map((_, d) => (d === 0 ? k : 0)));
      let built: Built = new Map();
      for (const [k, kind] of kinds.entries())
        family[kind].forEach((_, index) => {
          for (const offset of places)
            for (let times = 0; times <= (index + k) % 3; times += 1)
              built = pressed(built, { species: `s${String(k)}`, kind, index, offset });
        });
      const size = family.vectors.map(() => '4').join(' x ');
      const text = [
        `lattice ${name} torus ${size}`,
        ...kinds.map((kind, k) => `spins s${String(k)} on ${kind}`),
        operatorText(family, built, 'W'),
      ].join('\n');
      const report = newDerivation().derive(text);
      expect(report.problems).toEqual([]);
      const orbit = report.declarations.find((one) => one.name === 'W')?.supports[0]?.orbit ?? [];
      const plain = (sites: readonly Site[]) =>
        sites.map((s) => `${s.species} ${s.kind} ${String(s.index)} ${s.offset.join()} ${s.pauli}`).sort();
      // The report's representative may stand elsewhere by whole unit cells.
      const read = sitesOf(family, orbit);
      const first = [...built.values()].find((s) => s.species === 's0' && s.index === 0);
      const there = read.filter((s) => s.species === 's0' && s.index === 0).map((s) => s.offset[0] ?? 0);
      const by = Math.min(...there) - (first?.offset[0] ?? 0);
      const back = read.map((s) => ({ ...s, offset: s.offset.map((c, d) => (d === 0 ? c - by : c)) }));
      expect(plain(back)).toEqual(plain([...built.values()]));
    },
  );
});

describe('a term laid over a law', () => {
  const source = placed([
    {
      id: 'all',
      kind: 'statements',
      text: [
        'lattice square torus 4 x 4',
        'spins g on links',
        'law flat(p: plaquettes) = prod(l: rim(p)) g^z[l]',
        'model code = - sum(v: vertices) prod(l: star(v)) g^x[l] - sum(l: links) g^x[l] - sum(l: links) g^z[l]',
        'audit commute code with flat',
      ].join('\n'),
    },
  ]);
  const report = newDerivation().derive(source.text);
  const slices = slicesOf(report, source.entries, []);
  const family = familyOf('square');
  const terms = report.models['code']?.terms ?? [];
  const over = (of: (orbit: (typeof terms)[number]['orbit']) => boolean) => {
    const term = terms.find((one) => of(one.orbit));
    return laidOver(family, slices, overRef('code', term?.piece ?? -1, 'flat'));
  };

  it('shows star and plaquette meeting on two links, so that they commute', () => {
    const star = over((orbit) => orbit.length === 4);
    expect(star?.commutes).toBe(true);
    expect(star?.meets).toHaveLength(2);
    expect(star?.term.sites).toHaveLength(4);
    expect(star?.law.sites).toHaveLength(4);
  });

  it('shows a single X on one link of the plaquette, where they anticommute', () => {
    const field = over((orbit) => orbit.length === 1 && orbit[0]?.pauli === 'x');
    expect(field?.commutes).toBe(false);
    expect(field?.meets).toHaveLength(1);
  });

  it('finds no meeting of equal operators, and nothing for other references', () => {
    const diagonal = over((orbit) => orbit.length === 1 && orbit[0]?.pauli === 'z');
    expect(diagonal?.meets).toEqual([]);
    expect(laidOver(family, slices, 'code/0')).toBeUndefined();
    expect(laidOver(family, slices, overRef('code', 99, 'flat'))).toBeUndefined();
    expect(meeting([], [])).toEqual([]);
  });
});

describe('the view of three dimensions', () => {
  const angle = fc.double({ min: -6, max: 6, noNaN: true });
  const point = fc.tuple(...[0, 1, 2].map(() => fc.double({ min: -9, max: 9, noNaN: true })));

  it('is a rotation: lengths stay as they are', () => {
    fc.assert(
      fc.property(angle, angle, point, (turn, tilt, at) => {
        const seen = turnedBy({ turn, tilt })(at);
        expect(Math.hypot(...seen)).toBeCloseTo(Math.hypot(...at), 9);
      }),
      { seed: 5 },
    );
  });

  it('keeps the third axis upright, turns by the arrow keys, and comes home', () => {
    fc.assert(
      fc.property(angle, angle, (turn, tilt) => {
        const view = turned(usualView, turn, tilt);
        expect(turnedBy(view)([0, 0, 1])[0]).toBeCloseTo(0, 12);
        expect(turnedBy(view)([0, 0, 1])[1]).toBeGreaterThan(0);
        expect(viewByKey(view, 'Home')).toEqual(usualView);
      }),
      { seed: 6 },
    );
    expect(viewByKey(usualView, 'ArrowLeft')).not.toEqual(usualView);
    expect(viewByKey(usualView, 'Tab')).toBeNull();
  });
});

describe('the declared lattice', () => {
  const lattice = (boundary: PlateLattice['boundary'], periods: number[][]): PlateLattice => ({
    family: 'square',
    boundary,
    periods,
    geometry: null,
    species: {},
  });
  const square = familyOf('square');

  it('is drawn whole where it is small, and ends where it is open', () => {
    const open = lattice('open', [
      [4, 0],
      [0, 3],
    ]);
    const window = windowAbout(square, [], open);
    expect(window).toEqual([
      [0, 3],
      [0, 2],
    ]);
    // 4 x 3 vertices: 3 links in each of 3 rows, 2 in each of 4 columns, and none that leads out.
    const frame = frameOf(square, window, undefined, open);
    expect(frame.links).toHaveLength(3 * 3 + 2 * 4);
    const cylinder = frameOf(square, window, undefined, { ...open, boundary: 'cylinder' });
    expect(cylinder.links.filter((link) => link.outside)).toHaveLength(2 * 3);
  });

  it('has no window of its own when its periods are tilted', () => {
    const tilted = [
      [2, 2],
      [1, -2],
    ];
    expect(declaredWindow(lattice('torus', tilted))).toBeNull();
  });
});
