/** Sentences of the engine as the page prints them: true signs, powers of ten, and operators as operators. */

const raised: ReadonlyMap<string, string> = new Map(
  [...'0123456789-'].map((digit, k) => [digit, [...'⁰¹²³⁴⁵⁶⁷⁸⁹⁻'][k] ?? digit]),
);

/** Digits as an exponent. */
export const superscript = (digits: string): string => [...digits].map((digit) => raised.get(digit) ?? digit).join('');

const words: Readonly<Record<string, string>> = {
  vertices: 'vertex',
  links: 'link',
  plaquettes: 'plaquette',
  cubes: 'cube',
};

/** `links.2(0, 1)` → "link 2 at (0, 1)"; other ways to name a cell stay as they are. */
function cellInWords(cell: string): string {
  const found = /^(vertices|links|plaquettes|cubes)(?:\.(\w+))?\s*\(([^()]*)\)$/.exec(cell.trim());
  if (!found) return cell;
  const [, kind = '', label, at = ''] = found;
  return `${words[kind] ?? kind}${label === undefined ? '' : ` ${label}`} (${at})`.replace(/-(?=\d)/g, '−');
}

const operator = /([\p{L}_][\p{L}\p{N}_]*)\^([xyz])\[([^\]]+)\]/gu;
const bareCell = /([\p{L}_][\p{L}\p{N}_]*)\[((?:vertices|links|plaquettes|cubes)[^\]]*)\]/gu;

/** A sentence with $…$ for what is mathematics in it. Parts between dollar signs are left as they are. */
export function printed(sentence: string): string {
  return sentence
    .split(/(\$[^$]*\$)/)
    .map((part) => (part.startsWith('$') ? part : plainPart(part)))
    .join('');
}

function plainPart(text: string): string {
  return text
    .replace(operator, (_, name: string, pauli: string, cell: string) => {
      const letter = name.length === 1 ? name : `\\mathit{${name.replace(/_/g, '\\_')}}`;
      return `$\\p${pauli}{${letter}^{${pauli}}}$ at ${cellInWords(cell)}`;
    })
    .replace(bareCell, (_, name: string, cell: string) => `${name} at ${cellInWords(cell)}`)
    .replace(/(\d(?:\.\d+)?)e([+-]?)(\d+)/g, (_, digits: string, sign: string, power: string) => {
      const mantissa = digits.replace(/\.0+$/, '');
      return `${mantissa} × 10${superscript(`${sign === '-' ? '-' : ''}${String(Number(power))}`)}`;
    })
    .replace(/(\d) x (?=\d)/g, '$1 × ')
    .replace(/(^|[\s=(,])-(?=\d)/g, '$1−');
}
