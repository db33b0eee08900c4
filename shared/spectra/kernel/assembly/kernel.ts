// The loops of the kernel in AssemblyScript with SIMD. Pointers are byte addresses of float64 arrays, 16-byte aligned
// unless said otherwise; lengths count float64. Blocks (`size`) are powers of two; other lengths may be odd.
// Compiled by `npm run kernel`; `../wasm.ts` wraps the exports and owns the memory.

/** Σ a[k] b[k] */
export function dot(a: usize, b: usize, n: i32): f64 {
  let s0 = f64x2.splat(0);
  let s1 = f64x2.splat(0);
  let s2 = f64x2.splat(0);
  let s3 = f64x2.splat(0);
  let k = 0;
  for (; k + 8 <= n; k += 8) {
    s0 = f64x2.add(s0, f64x2.mul(v128.load(a), v128.load(b)));
    s1 = f64x2.add(s1, f64x2.mul(v128.load(a, 16), v128.load(b, 16)));
    s2 = f64x2.add(s2, f64x2.mul(v128.load(a, 32), v128.load(b, 32)));
    s3 = f64x2.add(s3, f64x2.mul(v128.load(a, 48), v128.load(b, 48)));
    a += 64;
    b += 64;
  }
  const s = f64x2.add(f64x2.add(s0, s1), f64x2.add(s2, s3));
  let sum = f64x2.extract_lane(s, 0) + f64x2.extract_lane(s, 1);
  for (; k < n; k++) {
    sum += load<f64>(a) * load<f64>(b);
    a += 8;
    b += 8;
  }
  return sum;
}

/** y += alpha x */
export function axpy(alpha: f64, x: usize, y: usize, n: i32): void {
  const c = f64x2.splat(alpha);
  let k = 0;
  for (; k + 4 <= n; k += 4) {
    v128.store(y, f64x2.add(v128.load(y), f64x2.mul(c, v128.load(x))));
    v128.store(y, f64x2.add(v128.load(y, 16), f64x2.mul(c, v128.load(x, 16))), 16);
    x += 32;
    y += 32;
  }
  for (; k < n; k++) {
    store<f64>(y, load<f64>(y) + alpha * load<f64>(x));
    x += 8;
    y += 8;
  }
}

export function scale(alpha: f64, x: usize, n: i32): void {
  for (let k = 0; k < n; k++) {
    store<f64>(x, alpha * load<f64>(x));
    x += 8;
  }
}

/** out[i] += v_i · w for four vectors in one sweep over w */
export function dots4(v0: usize, v1: usize, v2: usize, v3: usize, w: usize, n: i32, out: usize): void {
  let s0 = f64x2.splat(0);
  let s1 = f64x2.splat(0);
  let s2 = f64x2.splat(0);
  let s3 = f64x2.splat(0);
  const pairs = n & ~1;
  let at: usize = 0;
  const end = (<usize>pairs) << 3;
  for (; at < end; at += 16) {
    const x = v128.load(w + at);
    s0 = f64x2.add(s0, f64x2.mul(x, v128.load(v0 + at)));
    s1 = f64x2.add(s1, f64x2.mul(x, v128.load(v1 + at)));
    s2 = f64x2.add(s2, f64x2.mul(x, v128.load(v2 + at)));
    s3 = f64x2.add(s3, f64x2.mul(x, v128.load(v3 + at)));
  }
  let a = f64x2.extract_lane(s0, 0) + f64x2.extract_lane(s0, 1);
  let b = f64x2.extract_lane(s1, 0) + f64x2.extract_lane(s1, 1);
  let c = f64x2.extract_lane(s2, 0) + f64x2.extract_lane(s2, 1);
  let d = f64x2.extract_lane(s3, 0) + f64x2.extract_lane(s3, 1);
  if (pairs < n) {
    const x = load<f64>(w + end);
    a += x * load<f64>(v0 + end);
    b += x * load<f64>(v1 + end);
    c += x * load<f64>(v2 + end);
    d += x * load<f64>(v3 + end);
  }
  store<f64>(out, load<f64>(out) + a);
  store<f64>(out, load<f64>(out, 8) + b, 8);
  store<f64>(out, load<f64>(out, 16) + c, 16);
  store<f64>(out, load<f64>(out, 24) + d, 24);
}

/** w += Σ c_i v_i for four vectors in one sweep over w */
export function combine4(
  v0: usize,
  v1: usize,
  v2: usize,
  v3: usize,
  c0: f64,
  c1: f64,
  c2: f64,
  c3: f64,
  w: usize,
  n: i32,
): void {
  const a = f64x2.splat(c0);
  const b = f64x2.splat(c1);
  const c = f64x2.splat(c2);
  const d = f64x2.splat(c3);
  const pairs = n & ~1;
  const end = (<usize>pairs) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    const p = f64x2.add(f64x2.mul(a, v128.load(v0 + at)), f64x2.mul(b, v128.load(v1 + at)));
    const q = f64x2.add(f64x2.mul(c, v128.load(v2 + at)), f64x2.mul(d, v128.load(v3 + at)));
    v128.store(w + at, f64x2.add(v128.load(w + at), f64x2.add(p, q)));
  }
  if (pairs < n) {
    store<f64>(
      w + end,
      load<f64>(w + end) +
        c0 * load<f64>(v0 + end) +
        c1 * load<f64>(v1 + end) +
        c2 * load<f64>(v2 + end) +
        c3 * load<f64>(v3 + end),
    );
  }
}

/** out[k] += c × Σ_i source_i[k ^ x_i] over a block, all x_i even */
export function flip4(
  out: usize,
  s0: usize,
  s1: usize,
  s2: usize,
  s3: usize,
  x0: usize,
  x1: usize,
  x2: usize,
  x3: usize,
  c: f64,
  size: i32,
): void {
  const factor = f64x2.splat(c);
  const end = (<usize>size) << 3;
  x0 <<= 3;
  x1 <<= 3;
  x2 <<= 3;
  x3 <<= 3;
  for (let at: usize = 0; at < end; at += 16) {
    const p = f64x2.add(v128.load(s0 + (at ^ x0)), v128.load(s1 + (at ^ x1)));
    const q = f64x2.add(v128.load(s2 + (at ^ x2)), v128.load(s3 + (at ^ x3)));
    v128.store(out + at, f64x2.add(v128.load(out + at), f64x2.mul(factor, f64x2.add(p, q))));
  }
}

/** out[k] += c × source[k ^ x] over a block */
export function flip1(out: usize, source: usize, x: usize, c: f64, size: i32): void {
  if (size < 2) {
    store<f64>(out, load<f64>(out) + c * load<f64>(source));
    return;
  }
  const factor = f64x2.splat(c);
  const end = (<usize>size) << 3;
  const swap = (x & 1) != 0;
  const step = (x & ~1) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    let v = v128.load(source + (at ^ step));
    if (swap) v = v128.shuffle<f64>(v, v, 1, 0);
    v128.store(out + at, f64x2.add(v128.load(out + at), f64x2.mul(factor, v)));
  }
}

/** out[k] += sign × table[k ^ x] source[k ^ x] over a block */
export function flipTable(out: usize, source: usize, table: usize, x: usize, sign: f64, size: i32): void {
  if (size < 2) {
    store<f64>(out, load<f64>(out) + sign * load<f64>(table) * load<f64>(source));
    return;
  }
  const factor = f64x2.splat(sign);
  const end = (<usize>size) << 3;
  const swap = (x & 1) != 0;
  const step = (x & ~1) << 3;
  for (let at: usize = 0; at < end; at += 16) {
    let v = f64x2.mul(v128.load(source + (at ^ step)), v128.load(table + (at ^ step)));
    if (swap) v = v128.shuffle<f64>(v, v, 1, 0);
    v128.store(out + at, f64x2.add(v128.load(out + at), f64x2.mul(factor, v)));
  }
}

/** out[k] += sign × values[index[k]] source[k], index of bytes */
export function diagonal8(out: usize, source: usize, index: usize, values: usize, sign: f64, n: i32): void {
  for (let k = 0; k < n; k++) {
    const d = load<f64>(values + ((<usize>load<u8>(index)) << 3));
    store<f64>(out, load<f64>(out) + sign * d * load<f64>(source));
    out += 8;
    source += 8;
    index += 1;
  }
}

/** The same, index of 16-bit numbers */
export function diagonal16(out: usize, source: usize, index: usize, values: usize, sign: f64, n: i32): void {
  for (let k = 0; k < n; k++) {
    const d = load<f64>(values + ((<usize>load<u16>(index)) << 3));
    store<f64>(out, load<f64>(out) + sign * d * load<f64>(source));
    out += 8;
    source += 8;
    index += 2;
  }
}

/** out[k] += sign × values[k] source[k] */
export function diagonal64(out: usize, source: usize, values: usize, sign: f64, n: i32): void {
  for (let k = 0; k < n; k++) {
    store<f64>(out, load<f64>(out) + sign * load<f64>(values) * load<f64>(source));
    out += 8;
    source += 8;
    values += 8;
  }
}

/** out += sign × matrix × source, compressed rows with 32-bit starts and columns */
export function rows(out: usize, source: usize, starts: usize, columns: usize, values: usize, sign: f64, n: i32): void {
  for (let r = 0; r < n; r++) {
    let sum: f64 = 0;
    const from = load<u32>(starts + ((<usize>r) << 2));
    const to = load<u32>(starts + ((<usize>r) << 2), 4);
    for (let k = from; k < to; k++) {
      const column = <usize>load<u32>(columns + ((<usize>k) << 2));
      sum += load<f64>(values + ((<usize>k) << 3)) * load<f64>(source + (column << 3));
    }
    const at = out + ((<usize>r) << 3);
    store<f64>(at, load<f64>(at) + sign * sum);
  }
}

/**
 * One sweep of the Householder reduction (solvers/dense): below and right of (from, from) the lower triangle of the
 * row-major (n × n) matrix becomes a − v wᵀ − w vᵀ, and y is set to the new matrix times u.
 */
export function sweep(a: usize, n: i32, from: i32, v: usize, w: usize, u: usize, y: usize): void {
  for (let c = from; c < n; c++) store<f64>(y + ((<usize>c) << 3), 0);
  for (let r = from; r < n; r++) {
    const row = a + ((<usize>(r * n)) << 3);
    const place = (<usize>r) << 3;
    const vr = load<f64>(v + place);
    const wr = load<f64>(w + place);
    const ur = load<f64>(u + place);
    const vv = f64x2.splat(vr);
    const ww = f64x2.splat(wr);
    const uu = f64x2.splat(ur);
    let sums = f64x2.splat(0);
    let at: usize = (<usize>from) << 3;
    for (; at + 16 <= place; at += 16) {
      const x = f64x2.sub(
        f64x2.sub(v128.load(row + at), f64x2.mul(vv, v128.load(w + at))),
        f64x2.mul(ww, v128.load(v + at)),
      );
      v128.store(row + at, x);
      sums = f64x2.add(sums, f64x2.mul(x, v128.load(u + at)));
      v128.store(y + at, f64x2.add(v128.load(y + at), f64x2.mul(x, uu)));
    }
    let sum = f64x2.extract_lane(sums, 0) + f64x2.extract_lane(sums, 1);
    if (at < place) {
      const x = load<f64>(row + at) - vr * load<f64>(w + at) - wr * load<f64>(v + at);
      store<f64>(row + at, x);
      sum += x * load<f64>(u + at);
      store<f64>(y + at, load<f64>(y + at) + x * ur);
    }
    const x = load<f64>(row + place) - 2 * vr * wr;
    store<f64>(row + place, x);
    store<f64>(y + place, load<f64>(y + place) + sum + x * ur);
  }
}
