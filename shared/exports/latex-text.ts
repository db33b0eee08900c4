/** Text that comes from people, as LaTeX that compiles whatever they wrote. */

const special: Readonly<Record<string, string>> = {
  '\\': '\\textbackslash{}',
  '{': '\\{',
  '}': '\\}',
  '#': '\\#',
  $: '\\$',
  '%': '\\%',
  '&': '\\&',
  _: '\\_',
  '^': '\\textasciicircum{}',
  '~': '\\textasciitilde{}',
  '<': '\\textless{}',
  '>': '\\textgreater{}',
  '|': '\\textbar{}',
  '"': '\\textquotedbl{}',
};

const greek =
  'α alpha β beta γ gamma δ delta ε varepsilon ζ zeta η eta θ theta ι iota κ kappa λ lambda μ mu ν nu ξ xi π pi ρ rho σ sigma τ tau υ upsilon φ varphi χ chi ψ psi ω omega Γ Gamma Δ Delta Θ Theta Λ Lambda Ξ Xi Π Pi Σ Sigma Φ Phi Ψ Psi Ω Omega ϕ phi ϵ epsilon';
const symbols =
  '× times · cdot − - ± pm ≤ le ≥ ge ≠ ne ≈ approx ≡ equiv → to ← leftarrow ↔ leftrightarrow ⇒ Rightarrow ↦ mapsto ∈ in ∉ notin ∑ sum ∏ prod √ surd ∞ infty ⟨ langle ⟩ rangle † dagger ‡ ddagger ∘ circ ⊗ otimes ⊕ oplus ∂ partial ∇ nabla ∀ forall ∃ exists ∼ sim ∝ propto ℏ hbar ½ tfrac12 ² {}^2 ³ {}^3 ₀ {}_0 ₁ {}_1 ₂ {}_2 ₃ {}_3 ⊂ subset ∪ cup ∩ cap ∅ emptyset ⋯ cdots △ triangle □ square';

function table(): Map<string, string> {
  const pairs = `${greek} ${symbols}`.split(' ');
  const found = new Map<string, string>();
  for (let at = 0; at + 1 < pairs.length; at += 2) {
    const name = pairs[at + 1] ?? '';
    found.set(pairs[at] ?? '', /^[a-z]/i.test(name) ? `\\${name}` : name);
  }
  return found;
}
const inMath = table();
// \square is not in the kernel of LaTeX.
inMath.set('□', '\\Box');
inMath.set('△', '\\bigtriangleup');

const inText: Readonly<Record<string, string>> = {
  '–': '--',
  '—': '---',
  '“': '``',
  '”': "''",
  '‘': '`',
  '’': "'",
  '…': '\\ldots{}',
  '\u00a0': '~',
  '\u2009': '\\,',
  '\u202f': '\\,',
};

/** Letters of Latin alphabets, which every LaTeX sets with the encoding T1. */
const latin = /[\u00a1-\u017f]/;

/** One character outside mathematics. What no font of the standard classes has is named by its number. */
function character(one: string): string {
  const known = special[one] ?? inText[one];
  if (known !== undefined) return known;
  const math = inMath.get(one);
  if (math !== undefined) return `\\ensuremath{${math}}`;
  const code = one.codePointAt(0) ?? 0;
  if (code < 0x20 && one !== '\n' && one !== '\t') return '';
  return code < 0x80 || latin.test(one) ? one : `[U+${code.toString(16).toUpperCase().padStart(4, '0')}]`;
}

/** Text outside mathematics. */
export const latexText = (text: string): string => Array.from(text.normalize('NFC'), character).join('');

/** Typed text, letter for letter, spaces kept. */
export const latexCode = (text: string): string =>
  `\\texttt{${latexText(text)
    .replaceAll('--', '-{}-')
    .replaceAll("''", "'{}'")
    .replaceAll('``', '`{}`')
    .replaceAll(' ', '\\ ')}}`;

/** Mathematics of people or of the engine: pasted letters get their names. Braces that do not match would break the page: they are shown. */
export function latexMath(tex: string): string | null {
  let depth = 0;
  for (const token of tex.match(/\\.|[{}]/gs) ?? []) {
    if (token === '{') depth += 1;
    if (token === '}') depth -= 1;
    if (depth < 0) return null;
  }
  // What would leave mathematics, read files or define commands is no formula.
  if (
    depth !== 0 ||
    /(?<!\\)(?:\\\\)*[$%#]|\\(?:input|include|write|openin|openout|read|def|let|catcode|csname|newcommand|renewcommand|usepackage|end(?![a-z])\{document\})/.test(
      tex,
    )
  ) {
    return null;
  }
  const set = Array.from(tex.normalize('NFC'), (one) => {
    const math = inMath.get(one);
    if (math !== undefined) return `{${math}}`;
    return (one.codePointAt(0) ?? 0) < 0x80 ? one : `\\text{${latexText(one)}}`;
  }).join('');
  // An empty line ends a paragraph, which is an error inside a formula.
  return set.replace(/\n\s*\n/g, '\n');
}

const parts =
  /\$\$([^$]+)\$\$|\$([^$\n]+(?:\n[^$\n]+)*)\$|`([^`\n]+)`|\*\*([^*\n]+)\*\*|(?<![\w*])\*([^*\n]+)\*(?![\w*])|(?<!\w)_([^_\n]+)_(?!\w)|!?\[([^\]\n]*)\]\(([^)\s]+)\)/g;

/** A run of Markdown: emphasis, code, links, $…$ and $$…$$. */
export function latexInline(text: string): string {
  let set = '';
  let from = 0;
  for (const found of text.matchAll(parts)) {
    set += latexText(text.slice(from, found.index));
    from = found.index + found[0].length;
    const [whole, display, inline, code, strong, star, under, label, href] = found;
    if (display !== undefined) set += formula(display, (tex) => `\\[${tex}\\]`, whole);
    else if (inline !== undefined) set += formula(inline, (tex) => `$${tex}$`, whole);
    else if (code !== undefined) set += latexCode(code);
    else if (strong !== undefined) set += `\\textbf{${latexInline(strong)}}`;
    else if (star !== undefined || under !== undefined) set += `\\emph{${latexInline(star ?? under ?? '')}}`;
    else set += link(label ?? '', href ?? '');
  }
  return set + latexText(text.slice(from));
}

function formula(tex: string, wrap: (tex: string) => string, whole: string): string {
  const set = latexMath(tex);
  return set === null ? latexCode(whole.replaceAll('\n', ' ')) : wrap(set);
}

function link(label: string, href: string): string {
  const words = label === '' ? latexText(href) : latexInline(label);
  if (!/^(?:https?:\/\/|mailto:|doi:)/.test(href)) return words;
  const address = encodeURI(decodeSafely(href)).replace(
    /[%#&_~^{}\\]/g,
    (one) => `\\${one === '\\' ? 'textbackslash' : one}`,
  );
  return `\\href{${address}}{${words}}`;
}

function decodeSafely(href: string): string {
  try {
    return decodeURI(href);
  } catch {
    return href;
  }
}

/** A text of Markdown as paragraphs, headings, lists, quotations and code. */
export function latexProse(markdown: string): string {
  const lines = markdown.split('\n');
  const out: string[] = [];
  let paragraph: string[] = [];
  let list: 'itemize' | 'enumerate' | null = null;
  const flush = (): void => {
    if (paragraph.length > 0) out.push(`${latexInline(paragraph.join('\n'))}\n`);
    paragraph = [];
  };
  const close = (): void => {
    flush();
    if (list !== null) out.push(`\\end{${list}}\n`);
    list = null;
  };
  for (let at = 0; at < lines.length; at += 1) {
    const line = lines[at] ?? '';
    const heading = /^(#{1,6})\s+(.*?)\s*#*$/.exec(line);
    const item = /^\s{0,3}(?:([-*+])|\d{1,3}[.)])\s+(.*)$/.exec(line);
    if (/^\s*```/.test(line)) {
      close();
      const end = lines.findIndex((other, k) => k > at && /^\s*```/.test(other));
      const code = lines.slice(at + 1, end === -1 ? undefined : end);
      out.push(latexListing(code));
      at = end === -1 ? lines.length : end;
    } else if (heading !== null) {
      close();
      const level = ['section', 'subsection', 'subsubsection'][(heading[1] ?? '#').length - 1] ?? 'paragraph';
      out.push(`\\${level}*{${latexInline(heading[2] ?? '')}}\n`);
    } else if (item !== null) {
      flush();
      const kind = item[1] === undefined ? 'enumerate' : 'itemize';
      if (list !== kind) {
        close();
        out.push(`\\begin{${kind}}`);
        list = kind;
      }
      paragraph = [];
      out.push(`\\item ${latexInline(item[2] ?? '')}`);
    } else if (line.trim() === '') close();
    else if (list !== null && /^\s/.test(line)) out.push(latexInline(line.trim()));
    else {
      if (list !== null) close();
      paragraph.push(line.replace(/^>\s?/, ''));
    }
  }
  close();
  return out.join('\n');
}

/** Lines of typed text. */
export const latexListing = (lines: readonly string[]): string =>
  `\\begin{flushleft}\\small\n${lines.map((line) => (line.trim() === '' ? '\\mbox{}' : latexCode(line))).join('\\\\*\n')}\n\\end{flushleft}\n`;
