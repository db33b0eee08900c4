import { flatten } from '../../../shared/lattice/drawing.ts';

/** How a position becomes a point of the drawing: plainly in one and two dimensions, turned in three. */

/** Cartesian position (1 to 3 components) to x to the right, y upwards, and depth towards the eye. */
export type Projection = (position: readonly number[]) => readonly [x: number, y: number, depth: number];

/** The plain drawing; three dimensions obliquely. */
export const flat: Projection = (position) => {
  const [x, y] = flatten(position);
  return [x, y, 0];
};

/** Angles in radians: `turn` about the upright third axis, `tilt` of that axis towards the eye. */
export interface View {
  readonly turn: number;
  readonly tilt: number;
}

export const usualView: View = { turn: 0.45, tilt: 0.32 };

/** Nearly from above and nearly from below; past that up and down would change places. */
const mostTilt = 1.5;

export const turned = (view: View, turn: number, tilt: number): View => ({
  turn: view.turn + turn,
  tilt: Math.max(-mostTilt, Math.min(mostTilt, view.tilt + tilt)),
});

/** Parallel projection along the line of sight. */
export function turnedBy({ turn, tilt }: View): Projection {
  const [c, s, ct, st] = [Math.cos(turn), Math.sin(turn), Math.cos(tilt), Math.sin(tilt)];
  return ([x = 0, y = 0, z = 0]) => {
    const across = c * x + s * y;
    const away = c * y - s * x;
    return [across, ct * z + st * away, st * z - ct * away];
  };
}

export const projectionOf = (dimension: number, view: View): Projection => (dimension === 3 ? turnedBy(view) : flat);

/** A step of an arrow key, in radians. */
export const step = Math.PI / 24;

const keys: Readonly<Record<string, readonly [number, number]>> = {
  ArrowLeft: [-step, 0],
  ArrowRight: [step, 0],
  ArrowUp: [0, step],
  ArrowDown: [0, -step],
};

/** The view after an arrow key, or null for other keys; Home goes back to the usual one. */
export function viewByKey(view: View, key: string): View | null {
  if (key === 'Home') return usualView;
  const by = keys[key];
  return by ? turned(view, by[0], by[1]) : null;
}
