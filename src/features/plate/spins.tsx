import { useRef } from 'react';
import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import { type Built, canBeNamed, siteKey } from './built.ts';
import { pointOf, type Window, wholeCells } from './frame.ts';
import { cellInWords, type PlateSide, type Site } from './supports.ts';
import type { Projection } from './view.ts';

interface Props {
  readonly family: LatticeFamily;
  readonly window: Window;
  readonly project: Projection;
  readonly scale: number;
  readonly carriers: PlateSide['carriers'];
  readonly built: Built;
  readonly press: (spin: Omit<Site, 'pauli'>) => void;
}

const ways: Readonly<Record<string, readonly [number, number]>> = {
  ArrowLeft: [-1, 0],
  ArrowRight: [1, 0],
  ArrowUp: [0, -1],
  ArrowDown: [0, 1],
};

/** Every spin of the drawing as a button: pressed again and again it carries nothing, X, Y, Z. Arrow keys go to the next one. */
export function Spins({ family, window, project, scale, carriers, built, press }: Props) {
  const group = useRef<SVGGElement>(null);
  const named = carriers.filter(({ kind, index }) => canBeNamed(family, kind, index));
  const spins = named.flatMap(({ species, kind, index }) =>
    wholeCells(family, window, kind, index).map((offset) => ({
      spin: { species, kind, index, offset },
      at: pointOf(family, kind, index, offset, project),
    })),
  );
  const go = (from: number, way: readonly [number, number]) => {
    const start = spins[from]?.at;
    if (!start) return;
    let best: { k: number; cost: number } | null = null;
    spins.forEach(({ at }, k) => {
      const along = (at.x - start.x) * way[0] + (at.y - start.y) * way[1];
      const aside = Math.abs((at.x - start.x) * way[1] + (at.y - start.y) * way[0]);
      // What lies aside counts double: an arrow means its direction first.
      if (along > 1e-6 && (!best || along + 2 * aside < best.cost)) best = { k, cost: along + 2 * aside };
    });
    const next = (best as { k: number } | null)?.k;
    if (next !== undefined) group.current?.querySelectorAll<SVGElement>('[role=button]')[next]?.focus();
  };
  return (
    <g ref={group} data-aid="">
      {spins.map(({ spin, at }, k) => {
        const pauli = built.get(siteKey(spin))?.pauli;
        return (
          <circle
            key={siteKey(spin)}
            className="plate-press"
            cx={at.x}
            cy={at.y}
            r={Math.min(12 / scale, 0.24)}
            fill="transparent"
            role="button"
            tabIndex={k === 0 ? 0 : -1}
            aria-label={`${spin.species} at ${cellInWords(family, spin)}: ${pauli?.toUpperCase() ?? 'nothing'}`}
            onClick={() => press(spin)}
            onKeyDown={(event) => {
              const way = ways[event.key];
              if (way) go(k, way);
              else if (event.key === 'Enter' || event.key === ' ') press(spin);
              else return;
              event.preventDefault();
              event.stopPropagation();
            }}
          />
        );
      })}
    </g>
  );
}
