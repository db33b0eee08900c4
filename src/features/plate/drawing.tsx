import { type ReactNode, type RefObject, useRef } from 'react';
import type { LatticeFamily } from '../../../shared/lattice/drawing.ts';
import { PauliShape } from '../../components/marks.tsx';
import type { Built } from './built.ts';
import { type Frame, frameOf, drawnOf, pointOf, pointsIn, type Window, windowAbout } from './frame.ts';
import { Ground } from './ground.tsx';
import type { Over } from './over.ts';
import { Spins } from './spins.tsx';
import type { PlateLattice, PlateSide, Support } from './supports.ts';
import { projectionOf, turned, type View, viewByKey } from './view.ts';

export interface Turning {
  readonly view: View;
  readonly set: (update: (view: View) => View) => void;
}

interface Props {
  readonly svg: RefObject<SVGSVGElement | null>;
  readonly family: LatticeFamily;
  readonly lattice: PlateLattice;
  readonly side: PlateSide;
  readonly supports: readonly Support[];
  readonly over: Over | undefined;
  readonly label: string;
  readonly height: number;
  readonly turning: Turning;
  /** Set while an operator is put together: what is pressed so far, and pressing. */
  readonly building: { readonly built: Built; readonly press: Parameters<typeof Spins>[0]['press'] } | null;
}

/** A piece of the lattice with what acts on it. Three dimensions turn by dragging and by the arrow keys. */
export function Drawing(props: Props) {
  const { svg, family, lattice, side, supports, over, label, height, turning, building } = props;
  const project = projectionOf(family.dimension, turning.view);
  const here = new Set(side.carriers.map(({ species }) => species));
  const built = building && [...building.built.values()].filter(({ species }) => here.has(species));
  const putTogether: readonly Support[] = built ? [{ sites: built, repeats: [] }] : [];
  const shown = over ? [over.term, over.law] : supports;
  const window = windowAbout(family, [...shown, ...putTogether], lattice);
  const frame = frameOf(family, window, project, lattice);
  const { box } = frame;
  // Marks have one size on the page, whatever the lattice's scale.
  const scale = Math.min(64, Math.max(building ? 40 : 24, (height - 92) / box.height));
  const size = 11 / scale;
  const drag = useDrag(family.dimension === 3 ? turning.set : null);
  return (
    <svg
      ref={svg}
      className={family.dimension === 3 ? 'plate-solid' : undefined}
      viewBox={[box.x, box.y, box.width, box.height].map((n) => n.toFixed(4)).join(' ')}
      width={box.width * scale}
      height={box.height * scale}
      role={building ? 'group' : 'img'}
      aria-label={label}
      {...drag}
    >
      <Ground family={family} lattice={lattice} window={window} project={project} scale={scale} />
      <Links frame={frame} scale={scale} solid={family.dimension === 3} />
      <g fill="var(--quiet)">
        {side.carriers.flatMap(({ species, kind, index }) =>
          pointsIn(family, window, kind, index, project).map((point, k) => (
            <circle key={`${species}${kind}${String(index)} ${String(k)}`} cx={point.x} cy={point.y} r={2.6 / scale} />
          )),
        )}
      </g>
      {over ? (
        <Laid {...{ over, family, window, project, size, scale }} />
      ) : (
        <Marks {...{ family, window, supports, project, size }} />
      )}
      {building && (
        <>
          <Marks {...{ family, window, project, size }} supports={putTogether} />
          <Spins {...{ family, window, project, scale }} carriers={side.carriers} {...building} />
        </>
      )}
    </svg>
  );
}

function Links({ frame, scale, solid }: { frame: Frame; scale: number; solid: boolean }) {
  const depths = frame.links.map((link) => link.from.depth + link.to.depth);
  const [low, high] = [Math.min(...depths), Math.max(...depths)];
  return (
    <g stroke={solid ? 'var(--quiet)' : 'var(--hair)'} fill="none">
      {frame.links.map((link, k) => (
        <line
          key={k}
          x1={link.from.x}
          y1={link.from.y}
          x2={link.to.x}
          y2={link.to.y}
          // What is farther is fainter, so that front and back are told apart.
          strokeOpacity={solid ? 0.3 + (0.6 * ((depths[k] ?? low) - low)) / (high - low || 1) : 1}
          strokeWidth={1.25 / scale}
          strokeDasharray={link.outside ? `${String(1.5 / scale)} ${String(4 / scale)}` : undefined}
        />
      ))}
    </g>
  );
}

interface MarksProps {
  readonly family: LatticeFamily;
  readonly window: Window;
  readonly supports: readonly Support[];
  readonly project: ReturnType<typeof projectionOf>;
  readonly size: number;
  readonly shift?: number;
}

function Marks({ family, window, supports, project, size, shift = 0 }: MarksProps): ReactNode {
  return drawnOf(family, window, supports, project).map((one, k) => (
    <g
      key={k}
      transform={`translate(${String(one.at.x + shift)} ${String(one.at.y - shift)}) rotate(${String(
        one.pauli === 'x' ? one.turn : 0,
      )}) scale(${String(size)})`}
    >
      <PauliShape pauli={one.pauli} />
    </g>
  ));
}

/** Term and law on one lattice, a little apart where both act, with a ring about the spins where they anticommute. */
function Laid({ over, scale, ...rest }: { over: Over; scale: number } & Omit<MarksProps, 'supports' | 'shift'>) {
  const { family, project, size } = rest;
  const apart = 0.55 * size;
  return (
    <>
      {over.meets.map((site) => {
        const at = pointOf(family, site.kind, site.index, site.offset, project);
        return (
          <circle
            key={`${site.species} ${site.kind} ${String(site.index)} ${site.offset.join(' ')}`}
            cx={at.x}
            cy={at.y}
            r={2.3 * size}
            fill="none"
            stroke={over.commutes ? 'var(--ink)' : 'var(--refuted)'}
            strokeWidth={2 / scale}
          />
        );
      })}
      <Marks {...rest} supports={[over.law]} shift={apart} />
      <Marks {...rest} supports={[over.term]} shift={-apart} />
    </>
  );
}

/** Radians for a CSS pixel of dragging, and how far a press may slip before it is one. */
const perPixel = 0.01;
const slip = 4;

function useDrag(set: Turning['set'] | null) {
  const from = useRef<{ x: number; y: number; dragging: boolean } | null>(null);
  if (!set) return {};
  return {
    onPointerDown: (event: React.PointerEvent) => {
      from.current = { x: event.clientX, y: event.clientY, dragging: false };
    },
    onPointerMove: (event: React.PointerEvent) => {
      const start = from.current;
      if (!start || event.buttons === 0) return;
      const [dx, dy] = [event.clientX - start.x, event.clientY - start.y];
      if (!start.dragging && Math.hypot(dx, dy) < slip) return;
      if (!start.dragging) event.currentTarget.setPointerCapture(event.pointerId);
      from.current = { x: event.clientX, y: event.clientY, dragging: true };
      set((view) => turned(view, -dx * perPixel, dy * perPixel));
    },
    onPointerUp: () => {
      from.current = null;
    },
  };
}

/** The arrow keys turn a lattice in three dimensions; whether the key was one of them. */
export function turnByKey(turning: Turning, key: string): boolean {
  if (!viewByKey(turning.view, key)) return false;
  turning.set((view) => viewByKey(view, key) ?? view);
  return true;
}
