import './plate.css';
import { useDeferredValue, useId, useRef, useState } from 'react';
import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import { Copy } from '../../components/copy.tsx';
import { Formula } from '../../components/formula.tsx';
import { PauliMark } from '../../components/marks.tsx';
import { savePng, saveSvg } from '../../components/picture.ts';
import { useHand } from '../../hand/useHand.ts';
import type { Reading } from '../../reading/state.ts';
import { type Built, freeName, operatorText, pressed } from './built.ts';
import { Drawing, type Turning, turnByKey } from './drawing.tsx';
import { sizeInWords, wraps } from './frame.ts';
import { keptHeight, keepHeight, heights } from './height.ts';
import { laidOver, type Over } from './over.ts';
import { cellInWords, type PlateLattice, type PlateSide, plateSides, supportInWords } from './supports.ts';
import { usualView } from './view.ts';

interface Props {
  readonly reading: Reading;
  /** Writes statements into the notebook; absent where nothing can be written. */
  readonly write?: ((text: string) => void) | undefined;
}

/** The lattice at the foot of the page: the support of the term in hand on the left, of its image on the right. */
export function Plate({ reading, write }: Props) {
  const [height, setHeight] = useState(keptHeight);
  const [built, setBuilt] = useState<Built | null>(null);
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
          {!folded && (
            <button
              type="button"
              className="act"
              aria-pressed={built !== null}
              onClick={() => {
                setBuilt(built ? null : new Map());
                if (!built && height < roomToBuild) change(roomToBuild);
              }}
            >
              {built ? 'leave the operator' : 'put an operator together'}
            </button>
          )}
        </div>
        {!folded && (
          <Sides reading={reading} lattice={lattice} height={height} built={built} setBuilt={setBuilt} write={write} />
        )}
      </div>
    </aside>
  );
}

/** Height from which spins can be pressed one by one. */
const roomToBuild = 300;

interface SidesProps extends Props {
  readonly lattice: PlateLattice;
  readonly height: number;
  readonly built: Built | null;
  readonly setBuilt: (built: Built | null) => void;
}

function Sides({ reading, lattice, height, built, setBuilt, write }: SidesProps) {
  const hand = useHand();
  // Drawing follows the pointer when there is time for it; the rows of the page answer at once.
  const held = useDeferredValue(hand);
  const [view, setView] = useState(usualView);
  const family = lattice.geometry as LatticeFamily;
  const { left, right } = plateSides(family, lattice, reading.slices, held);
  const over = laidOver(family, reading.slices, held.held?.left ?? held.held?.right ?? null);
  const nothing = !left.answered && !right.answered && !over;
  const building = built && {
    built,
    press: (spin: Parameters<typeof pressed>[1]) => setBuilt(pressed(built, spin)),
  };
  const common = { family, lattice, height, building, turning: { view, set: setView } };
  const models = reading.slices.flatMap((slice) => slice.models.map((item) => item.value));
  const languageOf = (name: string | undefined) => models.find((model) => model.name === name)?.language;
  const overSide = languageOf(over?.names.term) === 'gauge' ? 'gauge' : 'spin';
  return (
    <>
      <Side {...common} side={left} language="spin" over={overSide === 'spin' ? over : undefined} />
      <span className="plate-arrow" aria-hidden="true">
        {left.answered && right.answered ? '↦' : ''}
      </span>
      <Side {...common} side={right} language="gauge" over={overSide === 'gauge' ? over : undefined} />
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
        {built ? (
          <BuiltText family={family} built={built} reading={reading} write={write} />
        ) : (
          <>
            {nothing && <p>Point at a term, or move to it with Tab and the arrow keys, to see where it acts.</p>}
            {held.pinned && <p>pinned; space lets it go</p>}
            <p>
              The shaded cell is the unit cell.{lattice.boundary !== 'open' && ' Edges with equal strokes are one.'}
            </p>
          </>
        )}
      </div>
    </>
  );
}

interface BuiltTextProps {
  readonly family: LatticeFamily;
  readonly built: Built;
  readonly reading: Reading;
  readonly write: Props['write'];
}

/** What is put together, as the language writes it. */
function BuiltText({ family, built, reading, write }: BuiltTextProps) {
  const taken = new Set(
    reading.slices.flatMap((slice) => [...slice.models, ...slice.declarations].map((item) => item.value.name)),
  );
  const text = operatorText(family, built, freeName(taken));
  if (text === '') return <p>Press a spin: once for X, again for Y, again for Z, again for nothing.</p>;
  return (
    <>
      <p role="status" className="code plate-text">
        {text}
      </p>
      <p className="colophon-line">
        {write && (
          <button type="button" className="act" onClick={() => write(text)}>
            write it into the notebook
          </button>
        )}
        <Copy words="copy its text" text={() => text} />
      </p>
    </>
  );
}

interface SideProps {
  readonly family: LatticeFamily;
  readonly lattice: PlateLattice;
  readonly side: PlateSide;
  readonly language: 'spin' | 'gauge';
  readonly height: number;
  readonly over: Over | undefined;
  readonly turning: Turning;
  readonly building: Parameters<typeof Drawing>[0]['building'];
}

function Side({ family, lattice, side, language, height, over, turning, building }: SideProps) {
  const caption = useId();
  const svg = useRef<SVGSVGElement>(null);
  const supports = side.answered?.supports ?? [];
  const words = over ? overInWords(family, over) : supportInWords(family, supports);
  const solid = family.dimension === 3;
  const label = `${family.name} lattice, ${language} language${words === '' ? '' : `: ${words}`}`;
  return (
    // A lattice larger than its half scrolls, which the keyboard can do only with the focus in it.
    <figure
      className={`plate-side plate-${language}`}
      tabIndex={0}
      aria-label={`Plate in ${language} language${solid ? ', turned by the arrow keys' : ''}`}
      onKeyDown={(event) => {
        if (solid && turnByKey(turning, event.key)) event.preventDefault();
      }}
    >
      <Drawing {...{ svg, family, lattice, side, supports, over, label, height, turning, building }} />
      <figcaption id={caption} className="label">
        {over ? null : side.answered ? <Formula tex={side.answered.tex} /> : <span>{language} language</span>}
        {words !== '' && <span className="plate-words">{words}</span>}
        {!over && (side.answered?.others ?? 0) > 0 && (
          <span className="plate-words">and likewise in the other directions</span>
        )}
        {wraps(lattice, supports) && (
          <span className="plate-words">meets itself around the {sizeInWords(lattice)}</span>
        )}
        <Saving svg={svg} name={`plate-${family.name}-${language}`} />
      </figcaption>
    </figure>
  );
}

function Saving({ svg, name }: { svg: React.RefObject<SVGSVGElement | null>; name: string }) {
  const [failed, setFailed] = useState('');
  const png = () => {
    if (!svg.current) return;
    setFailed('');
    savePng(name, svg.current).catch(() => setFailed('The browser could not make a picture of it.'));
  };
  return (
    <span className="plate-saving">
      <button type="button" className="act" onClick={() => svg.current && saveSvg(name, svg.current)}>
        save SVG<span className="aside-only"> of {name}</span>
      </button>
      <button type="button" className="act" onClick={png}>
        save PNG<span className="aside-only"> of {name}</span>
      </button>
      <span role="alert" className="ink-refuted">
        {failed}
      </span>
    </span>
  );
}

/** The same as a term laid over a law, in words. */
function overInWords(family: LatticeFamily, over: Over): string {
  const [term, law] = [over.term, over.law].map((support) => supportInWords(family, [support]));
  const where = over.meets.map((site) => `${site.species} at ${cellInWords(family, site)}`).join(', ');
  const count = over.meets.length;
  const verdict =
    count === 0
      ? 'they act on no common spin in different ways'
      : `they differ on ${count === 1 ? 'one spin' : `${String(count)} spins`}, ${where}, ${
          count % 2 === 0 ? 'so their signs cancel' : 'so they anticommute'
        }`;
  return `a term of ${over.names.term}, ${term ?? ''}; over ${over.names.law}, ${law ?? ''}; ${verdict}`;
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
