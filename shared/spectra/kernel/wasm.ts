import { blockGroups, blockPattern, diagonalValues, lowBits, type BlockGroup, type Diagonal } from './flips.ts';
import type { FlipForm, Kernel, Prepared, RowForm, Vector } from './kernel.ts';
import { newArena, type Arena } from './memory.ts';

/** The kernel on a compiled module of `assembly/`. Nothing here fetches or reads a file: the bytes are given. */

type Numbers = (...numbers: number[]) => number;

/** What the compiled module exports; see assembly/kernel.ts for the arguments. */
type Loops = Readonly<
  Record<
    | 'dot'
    | 'axpy'
    | 'scale'
    | 'dots4'
    | 'combine4'
    | 'flip4'
    | 'flip1'
    | 'flipTable'
    | 'diagonal8'
    | 'diagonal16'
    | 'diagonal64'
    | 'rows'
    | 'sweep',
    Numbers
  >
>;

interface Placed extends Vector {
  readonly address: number;
}

const addressOf = (v: Vector): number => (v as Placed).address;

/** Entries of the pieces in which many vectors are swept together: 16 KiB each. */
const piece = 2048;

/** A kernel with a memory of its own (at most 4 GiB), from the bytes of kernel.wasm. */
export async function wasmKernel(bytes: BufferSource): Promise<Kernel> {
  return kernelOf(await WebAssembly.compile(bytes));
}

/** The same from a compiled module: cheap, so that each job may have its own memory and leave none behind. */
export async function kernelOf(module: WebAssembly.Module): Promise<Kernel> {
  const memory = new WebAssembly.Memory({ initial: 1, maximum: 65536 });
  const abort = () => {
    throw new Error('the kernel aborted');
  };
  const instance = await WebAssembly.instantiate(module, { env: { memory, abort } });
  return wrap(instance.exports as unknown as Loops, newArena(memory));
}

function wrap(loops: Loops, arena: Arena): Kernel {
  const placed = (address: number, length: number): Placed => ({
    address,
    length,
    get view() {
      return arena.floats(address, length);
    },
  });
  /** Address of a list of numbers of the kernel's, grown as needed. */
  const scratch = newScratch(arena);
  return {
    name: 'wasm',
    vector(length) {
      const v = placed(arena.take(8 * length), length);
      v.view.fill(0);
      return v;
    },
    release: (v) => arena.give(addressOf(v)),
    part: (v, offset, length) => placed(addressOf(v) + 8 * offset, length),
    fill: (v, value) => void v.view.fill(value),
    copy: (from, to) => to.view.set(from.view),
    dot: (a, b) => loops.dot(addressOf(a), addressOf(b), a.length),
    axpy: (alpha, x, y) => void loops.axpy(alpha, addressOf(x), addressOf(y), y.length),
    scale: (alpha, x) => void loops.scale(alpha, addressOf(x), x.length),
    dots(vectors, w, out) {
      const sums = scratch(vectors.length + 3);
      arena.floats(sums, vectors.length + 3).fill(0);
      sweepPieces(w.length, (from, size) => {
        const at = 8 * from;
        for (let k = 0; k < vectors.length; k += 4) {
          // The last few are filled up with the last vector; its extra sums are not read.
          const a = (i: number) => addressOf(vectors[Math.min(k + i, vectors.length - 1)]!) + at;
          loops.dots4(a(0), a(1), a(2), a(3), addressOf(w) + at, size, sums + 8 * k);
        }
      });
      out.set(arena.floats(sums, vectors.length));
    },
    combine(vectors, coefficients, w) {
      sweepPieces(w.length, (from, size) =>
        combinePiece(loops, vectors, coefficients, 0, 1, addressOf(w) + 8 * from, from, size),
      );
    },
    rotate(vectors, matrix, columns) {
      const work = scratch(piece * columns);
      sweepPieces(vectors[0]?.length ?? 0, (from, size) => {
        arena.floats(work, piece * columns).fill(0);
        for (let j = 0; j < columns; j++)
          combinePiece(loops, vectors, matrix, j, columns, work + 8 * piece * j, from, size);
        for (let j = 0; j < columns; j++) {
          const target = vectors[j];
          if (target) arena.floats(addressOf(target) + 8 * from, size).set(arena.floats(work + 8 * piece * j, size));
        }
      });
    },
    prepareFlips: (form) => prepareFlips(loops, arena, form),
    prepareRows: (form) => prepareRows(loops, arena, form),
    sweep: newSweep(loops, arena),
  };
}

function newScratch(arena: Arena): (length: number) => number {
  let address = 0;
  let size = 0;
  return (length) => {
    if (length > size) {
      if (size > 0) arena.give(address);
      size = Math.max(length, 4 * piece);
      address = arena.take(8 * size);
    }
    return address;
  };
}

function sweepPieces(length: number, visit: (from: number, size: number) => void): void {
  for (let from = 0; from < length; from += piece) visit(from, Math.min(piece, length - from));
}

/** target[0 … size) += Σ_k matrix[k × stride + column] vectors[k][from …] */
function combinePiece(
  loops: Loops,
  vectors: readonly Vector[],
  matrix: Float64Array,
  column: number,
  stride: number,
  target: number,
  from: number,
  size: number,
): void {
  const at = 8 * from;
  const address = (k: number) => addressOf(vectors[k]!) + at;
  const c = (k: number) => matrix[k * stride + column] ?? 0;
  let k = 0;
  for (; k + 4 <= vectors.length; k += 4) {
    loops.combine4(
      address(k),
      address(k + 1),
      address(k + 2),
      address(k + 3),
      c(k),
      c(k + 1),
      c(k + 2),
      c(k + 3),
      target,
      size,
    );
  }
  for (; k < vectors.length; k++) loops.axpy(c(k), address(k), target, size);
}

interface Quad {
  readonly constant: number;
  readonly groups: readonly [BlockGroup, BlockGroup, BlockGroup, BlockGroup];
}

/** Constant flips of one amplitude that move whole pairs, four at a time; the others one by one. */
function quads(groups: readonly BlockGroup[]): { four: Quad[]; single: BlockGroup[] } {
  const byConstant = new Map<number, BlockGroup[]>();
  const single: BlockGroup[] = [];
  for (const g of groups) {
    if (g.constant === undefined || g.xLow % 2 === 1) single.push(g);
    else byConstant.set(g.constant, [...(byConstant.get(g.constant) ?? []), g]);
  }
  const four: Quad[] = [];
  for (const [constant, list] of byConstant) {
    // Flips within the block first: they find it in the cache.
    list.sort((a, b) => a.xHigh - b.xHigh);
    for (let k = 0; k < list.length; k += 4) {
      const [a, b, c, d] = list.slice(k, k + 4);
      if (a && b && c && d) four.push({ constant, groups: [a, b, c, d] });
      else single.push(...list.slice(k));
    }
  }
  return { four, single };
}

function prepareFlips(loops: Loops, arena: Arena, form: FlipForm): Prepared {
  const dimension = 2 ** form.spins;
  const low = lowBits(form.spins);
  const size = 2 ** low;
  const groups = blockGroups(form);
  const { four, single } = form.spins > 0 ? quads(groups) : { four: [], single: groups };
  const diagonal = form.diagonal.length > 0 ? placeDiagonal(arena, diagonalValues(form)) : undefined;
  const tables = single.map((g) => (g.constant === undefined ? placeBytes(arena, g.tables) : 0));
  const tableBytes = single.reduce((sum, g) => sum + g.tables.byteLength, 0);
  return {
    dimension,
    bytes: (diagonal?.size ?? 0) + tableBytes,
    addTo(output, input, sign) {
      const out = addressOf(output);
      const source = addressOf(input);
      for (let start = 0; start < dimension; start += size) {
        const target = out + 8 * start;
        if (diagonal) addDiagonal(loops, diagonal, target, source, start, size, sign);
        for (const {
          constant,
          groups: [a, b, c, d],
        } of four) {
          const at = (g: BlockGroup) => source + 8 * (start ^ g.xHigh);
          loops.flip4(target, at(a), at(b), at(c), at(d), a.xLow, b.xLow, c.xLow, d.xLow, sign * constant, size);
        }
        for (let k = 0; k < single.length; k++) {
          const g = single[k]!;
          const from = start ^ g.xHigh;
          const at = source + 8 * from;
          if (g.constant !== undefined) loops.flip1(target, at, g.xLow, sign * g.constant, size);
          else loops.flipTable(target, at, tables[k]! + 8 * size * blockPattern(g, from >>> low), g.xLow, sign, size);
        }
      }
    },
    free() {
      tables.filter((t) => t > 0).forEach((t) => arena.give(t));
      if (diagonal) diagonal.addresses.forEach((a) => arena.give(a));
    },
  };
}

interface PlacedDiagonal {
  readonly values: number;
  readonly index: number;
  /** Bytes of an index; 0 where the values stand in order. */
  readonly step: 0 | 1 | 2;
  readonly addresses: readonly number[];
  readonly size: number;
}

function placeDiagonal(arena: Arena, d: Diagonal): PlacedDiagonal {
  const values = placeBytes(arena, d.values);
  if (!d.index) return { values, index: 0, step: 0, addresses: [values], size: d.values.byteLength };
  const index = placeBytes(arena, d.index);
  return {
    values,
    index,
    step: d.index instanceof Uint8Array ? 1 : 2,
    addresses: [values, index],
    size: d.values.byteLength + d.index.byteLength,
  };
}

function addDiagonal(
  loops: Loops,
  d: PlacedDiagonal,
  target: number,
  source: number,
  start: number,
  size: number,
  sign: number,
): void {
  const from = source + 8 * start;
  if (d.step === 0) loops.diagonal64(target, from, d.values + 8 * start, sign, size);
  else
    (d.step === 1 ? loops.diagonal8 : loops.diagonal16)(target, from, d.index + d.step * start, d.values, sign, size);
}

function placeBytes(arena: Arena, data: Float64Array | Uint32Array | Uint16Array | Uint8Array): number {
  const address = arena.take(data.byteLength);
  arena.bytes(address, data.byteLength).set(new Uint8Array(data.buffer, data.byteOffset, data.byteLength));
  return address;
}

function prepareRows(loops: Loops, arena: Arena, form: RowForm): Prepared {
  const [starts, columns, values] = [form.starts, form.columns, form.values].map((data) => placeBytes(arena, data)) as [
    number,
    number,
    number,
  ];
  return {
    dimension: form.dimension,
    bytes: form.starts.byteLength + form.columns.byteLength + form.values.byteLength,
    addTo: (output, input, sign) =>
      void loops.rows(addressOf(output), addressOf(input), starts, columns, values, sign, form.dimension),
    free: () => [starts, columns, values].forEach((a) => arena.give(a)),
  };
}

/** The sweep of the Householder reduction on a copy of the matrix in the kernel's memory. */
function newSweep(loops: Loops, arena: Arena): NonNullable<Kernel['sweep']> {
  return (n) => {
    const place = (length: number) => arena.take(8 * length);
    const [a, v, w, u, y] = [place(n * n), place(n), place(n), place(n), place(n)];
    return {
      matrix: arena.floats(a, n * n),
      v: arena.floats(v, n),
      w: arena.floats(w, n),
      u: arena.floats(u, n),
      y: arena.floats(y, n),
      run: (from) => void loops.sweep(a, n, from, v, w, u, y),
      free: () => [a, v, w, u, y].forEach((address) => arena.give(address)),
    };
  };
}
