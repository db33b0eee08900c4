import type { Claim } from '../../../shared/contracts/report.ts';
import { printed, superscript } from '../../components/typography.ts';

/** Figures and witness of a claim in words; what has no short form is left to the data (report, export). */

/** `maxDifference` → "max difference". */
const plainName = (name: string): string => name.replace(/([a-z])([A-Z])/g, '$1 $2').toLowerCase();

/** Six significant digits at most, a true minus, powers of ten as the trade writes them. */
export function numberText(value: number): string {
  if (!Number.isFinite(value)) return String(value);
  if (Number.isInteger(value) && Math.abs(value) < 1e15) return String(value).replace('-', '−');
  const text = Math.abs(value) < 1e-4 || Math.abs(value) >= 1e7 ? value.toExponential(1) : value.toPrecision(6);
  const [digits = '', power] = text.split('e');
  const short = digits.includes('.') ? digits.replace(/0+$/, '').replace(/\.$/, '') : digits;
  if (power === undefined) return short.replace('-', '−');
  return `${short} × 10${superscript(String(Number(power)))}`.replace('-', '−');
}

function valueText(value: unknown): string | null {
  if (typeof value === 'number') return numberText(value);
  if (typeof value === 'string') return printed(value);
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (Array.isArray(value) && value.length > 0 && value.every((one) => typeof one === 'number'))
    return value.map(numberText).join(', ');
  if (Array.isArray(value) && value.length > 0 && value.every((one) => typeof one === 'string'))
    return value.join(', ');
  return null;
}

/** Figures that can be read in a line, by their plain names. */
export function figuresOf(claim: Claim): readonly (readonly [string, string])[] {
  return Object.entries(claim.figures).flatMap(([name, value]) => {
    const text = valueText(value);
    return text === null ? [] : [[plainName(name), text] as const];
  });
}

/** The witness in one sentence; null when the statement says all there is. */
export function witnessSentence(claim: Claim): string | null {
  const words = claim.witness['tex'] ?? claim.witness['words'] ?? claim.witness['sentence'];
  if (typeof words !== 'string' || words === '' || words === claim.statement) return null;
  const capital =
    words.charAt(0) === words.charAt(0).toLowerCase() ? words : words.charAt(0).toUpperCase() + words.slice(1);
  return /[.!?]$/.test(capital) ? capital : `${capital}.`;
}
