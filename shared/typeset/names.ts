/**
 * Names in TeX. Every subscript and superscript is braced, and a name of several letters never falls apart into a product.
 */
const greek = new Set(
  (
    'alpha beta gamma delta epsilon zeta eta theta iota kappa lambda mu nu xi pi rho sigma tau upsilon phi chi psi omega ' +
    'Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi Psi Omega'
  ).split(' '),
);

const letter = (word: string): string | undefined =>
  greek.has(word) ? `\\${word}` : word.length === 1 ? word : undefined;

/** TeX of a subscript's own text: letters and digits stand as they are, words upright. */
const lower = (text: string): string => letter(text) ?? (/^\d+$/.test(text) ? text : `\\mathrm{${text}}`);

const escaped = (name: string): string => name.replace(/_/g, '\\_');

/**
 * A name: `J`, `\sigma`, `J_{x}` (Jx), `w_{1}` (w1), `J_{\mathrm{ring}}` (Jring, J_ring), else `\mathit{name}`.
 * `index: false` keeps a name whole, for symbols that carry a subscript of their own.
 */
export function nameTex(name: string, { index = true }: { readonly index?: boolean } = {}): string {
  const single = letter(name);
  if (single !== undefined) return single;
  if (index) {
    const m =
      /^([A-Za-z]+?)_([A-Za-z0-9]+)$/.exec(name) ??
      /^([A-Z])([a-z]+)$/.exec(name) ??
      /^([a-z])([xyz])$/.exec(name) ??
      /^([A-Za-z]+?)(\d+)$/.exec(name);
    const head = m?.[1] === undefined ? undefined : letter(m[1]);
    if (head !== undefined && m?.[2] !== undefined) return `${head}_{${lower(m[2])}}`;
  }
  return `\\mathit{${escaped(name)}}`;
}

/** A name as it is said: the name itself. */
export const nameSpoken = (name: string): string => name.replace(/_/g, ' ');
