import './plate.css';
import { useDeferredValue, useId, useState } from 'react';
import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import { Formula } from '../../components/formula.tsx';
import { PauliMark, PauliShape } from '../../components/marks.tsx';
import { useHand } from '../../hand/useHand.ts';
import type { Reading } from '../../reading/state.ts';
import { drawnOf, frameOf, pointsIn, sizeInWords, windowAbout, wraps } from './frame.ts';
import { keptHeight, keepHeight, heights } from './height.ts';
import { type PlateLattice, type PlateSide, plateSides, supportInWords } from './supports.ts';

/** The lattice at the foot of the page: the support of the term in hand on the left, of its image on the right. */
export function Plate({ reading }: { reading: Reading }) {
  const [height, setHeight] = useState(keptHeight);
  const { lattice } = reading;
  if (!lattice) return null;
  const change = (next: number) => {
    const kept = Math.max(heights.least, Math.min(heights.most(), next));
    setHeight(kept);
    keepHeight(kept);
  };
  const folded = height < heights.folded;
  return (
    <aside className="plate" aria-label="Plate" style={{ height: `${String(height)}px` }}>
      <Edge height={height} change={change} />
      <div className="plate-inside">
        <div className="plate-name label">
          <h2 className="head">Plate</h2>
          <p>{sizeInWords(lattice)}</p>
          <button
            type="button"
            className="act"
            aria-expanded={!folded}
            onClick={() => change(folded ? heights.usual : heights.least)}
          >
            {folded ? 'raise' : 'lower'}
          </button>
        </div>
        {!folded && <Sides reading={reading} lattice={lattice} height={height} />}
      </div>
    </aside>
  );
}

function Sides({ reading, lattice, height }: { reading: Reading; lattice: PlateLattice; height: number }) {
  const hand = useHand();
  // Drawing follows the pointer when there is time for it; the rows of the page answer at once.
  const held = useDeferredValue(hand);
  const family = lattice.geometry as LatticeFamily;
  const { left, right } = plateSides(family, lattice, reading.slices, held);
  const nothing = !left.answered && !right.answered;
  return (
    <>
      <Drawing family={family} lattice={lattice} side={left} language="spin" height={height} />
      <span className="plate-arrow" aria-hidden="true">
        {left.answered && right.answered ? '↦' : ''}
      </span>
      <Drawing family={family} lattice={lattice} side={right} language="gauge" height={height} />
      <div className="plate-key label">
        <p className="key-line">
          <span>
            <PauliMark pauli="x" /> X
          </span>
          <span>
            <PauliMark pauli="y" /> Y
          </span>
          <span>
            <PauliMark pauli="z" /> Z
          </span>
        </p>
        {nothing && <p>Point at a term, or move to it with Tab and the arrow keys, to see where it acts.</p>}
        {held.pinned && <p>pinned; space lets it go</p>}
      </div>
    </>
  );
}

interface DrawingProps {
  readonly family: LatticeFamily;
  readonly lattice: PlateLattice;
  readonly side: PlateSide;
  readonly language: 'spin' | 'gauge';
  readonly height: number;
}

function Drawing({ family, lattice, side, language, height }: DrawingProps) {
  const caption = useId();
  const supports = side.answered?.supports ?? [];
  const window = windowAbout(family, supports);
  const frame = frameOf(family, window);
  const { box } = frame;
  const drawn = drawnOf(family, window, supports);
  const words = supportInWords(family, supports);
  // Marks have one size on the page, whatever the lattice's scale.
  const scale = Math.min(64, Math.max(24, (height - 84) / box.height));
  const size = 11 / scale;
  return (
    <figure className={`plate-side plate-${language}`}>
      <svg
        viewBox={`${String(box.x)} ${String(box.y)} ${String(box.width)} ${String(box.height)}`}
        width={box.width * scale}
        height={box.height * scale}
        role="img"
        aria-label={`${family.name} lattice, ${language} language${words === '' ? '' : `: ${words}`}`}
      >
        <g stroke="var(--hair)" strokeWidth={1.25 / scale} fill="none">
          {frame.links.map((link, k) => (
            <line
              key={k}
              x1={link.from.x}
              y1={link.from.y}
              x2={link.to.x}
              y2={link.to.y}
              {...(link.outside ? { strokeDasharray: `${String(1.5 / scale)} ${String(4 / scale)}` } : {})}
            />
          ))}
        </g>
        <g fill="var(--quiet)">
          {side.carriers.flatMap(({ kind, index }) =>
            pointsIn(family, window, kind, index).map((point, k) => (
              <circle key={`${kind}${String(index)} ${String(k)}`} cx={point.x} cy={point.y} r={2.6 / scale} />
            )),
          )}
        </g>
        {drawn.map((one, k) => (
          <g
            key={k}
            transform={`translate(${String(one.at.x)} ${String(one.at.y)}) rotate(${String(
              one.pauli === 'x' ? one.turn : 0,
            )}) scale(${String(size)})`}
          >
            <PauliShape pauli={one.pauli} />
          </g>
        ))}
      </svg>
      <figcaption id={caption} className="label">
        {side.answered ? <Formula tex={side.answered.tex} /> : <span>{language} language</span>}
        {words !== '' && <span className="plate-words">{words}</span>}
        {(side.answered?.others ?? 0) > 0 && <span className="plate-words">and likewise in the other directions</span>}
        {wraps(lattice, supports) && (
          <span className="plate-words">meets itself around the {sizeInWords(lattice)}</span>
        )}
      </figcaption>
    </figure>
  );
}

/** The plate's upper edge: drag it, or move it with the arrow keys. */
function Edge({ height, change }: { height: number; change: (height: number) => void }) {
  const step = 24;
  return (
    <div
      className="plate-edge"
      role="separator"
      aria-orientation="horizontal"
      aria-label="Height of the plate"
      aria-valuemin={heights.least}
      aria-valuemax={heights.most()}
      aria-valuenow={height}
      tabIndex={0}
      onKeyDown={(event) => {
        const by = event.key === 'ArrowUp' ? step : event.key === 'ArrowDown' ? -step : 0;
        if (by === 0) return;
        event.preventDefault();
        change(height + by);
      }}
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
      }}
      onPointerMove={(event) => {
        if (event.currentTarget.hasPointerCapture(event.pointerId)) change(globalThis.innerHeight - event.clientY);
      }}
    />
  );
}
