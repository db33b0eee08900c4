/** SHA-256 (FIPS 180-4) in plain TypeScript, so that browser, command line and server name a question alike without waiting for it. */

const isPrime = (n: number): boolean => {
  for (let k = 2; k * k <= n; k++) if (n % k === 0) return false;
  return true;
};

/** First 32 bits of the fractional part. */
const fraction = (x: number): number => Math.floor((x - Math.floor(x)) * 2 ** 32) >>> 0;

/** The constants of sections 4.2.2 and 5.3.3: fractional parts of cube and square roots of the first primes. */
const primes = Array.from({ length: 312 }, (_, n) => n).filter((n) => n > 1 && isPrime(n));
const rounds = Uint32Array.from(primes.slice(0, 64), (prime) => fraction(Math.cbrt(prime)));
const start = Uint32Array.from(primes.slice(0, 8), (prime) => fraction(Math.sqrt(prime)));

const turned = (x: number, by: number): number => (x >>> by) | (x << (32 - by));

function compress(state: Uint32Array, words: Uint32Array): void {
  for (let t = 16; t < 64; t++) {
    const [a, b] = [words[t - 15] ?? 0, words[t - 2] ?? 0];
    const small = turned(a, 7) ^ turned(a, 18) ^ (a >>> 3);
    const large = turned(b, 17) ^ turned(b, 19) ^ (b >>> 10);
    words[t] = (words[t - 16] ?? 0) + small + (words[t - 7] ?? 0) + large;
  }
  let [a = 0, b = 0, c = 0, d = 0, e = 0, f = 0, g = 0, h = 0] = state;
  for (let t = 0; t < 64; t++) {
    const s1 = turned(e, 6) ^ turned(e, 11) ^ turned(e, 25);
    const one = (h + s1 + ((e & f) ^ (~e & g)) + (rounds[t] ?? 0) + (words[t] ?? 0)) | 0;
    const s0 = turned(a, 2) ^ turned(a, 13) ^ turned(a, 22);
    const two = (s0 + ((a & b) ^ (a & c) ^ (b & c))) | 0;
    [h, g, f, e, d, c, b, a] = [g, f, e, (d + one) | 0, c, b, a, (one + two) | 0];
  }
  [a, b, c, d, e, f, g, h].forEach((x, k) => (state[k] = (state[k] ?? 0) + x));
}

/** SHA-256 of a text in UTF-8, as 64 hex digits. */
export function sha256(text: string): string {
  const bytes = new TextEncoder().encode(text);
  const blocks = Math.ceil((bytes.length + 9) / 64);
  const padded = new Uint8Array(64 * blocks);
  padded.set(bytes);
  padded[bytes.length] = 0x80;
  const view = new DataView(padded.buffer);
  view.setUint32(padded.length - 8, Math.floor(bytes.length / 2 ** 29));
  view.setUint32(padded.length - 4, (bytes.length << 3) >>> 0);
  const state = Uint32Array.from(start);
  const words = new Uint32Array(64);
  for (let block = 0; block < blocks; block++) {
    for (let t = 0; t < 16; t++) words[t] = view.getUint32(64 * block + 4 * t);
    compress(state, words);
  }
  return [...state].map((word) => word.toString(16).padStart(8, '0')).join('');
}
