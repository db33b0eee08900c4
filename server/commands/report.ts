/**
 * `npm run --silent report -- FILE.gw [--json]`: the report of one source.
 * Exit status: 0 no problems, 1 problems in the source, 2 usage (also a file that cannot be read).
 */
import { readFileSync } from 'node:fs';
import { newDerivation } from '../../shared/derivation/derive.ts';
import type { Claim, Report } from '../../shared/contracts/report.ts';

const usage = `usage: npm run --silent report -- FILE.gw [--json]

  FILE.gw   a source in the operator language; - reads standard input
  --json    print the whole report as one JSON object
`;

const gradeMark: Readonly<Record<Claim['grade'], string>> = {
  proved: '■',
  exact: '□',
  numerical: '≈',
  refuted: '✕',
  open: '⬚',
};

/** Exit status 2 with the reason and the usage on standard error. */
function fail(reason: string): never {
  process.stderr.write(`${reason}\n\n${usage}`);
  process.exit(2);
}

interface Arguments {
  readonly file: string;
  readonly json: boolean;
}

function readArguments(args: readonly string[]): Arguments {
  const files: string[] = [];
  let json = false;
  for (const arg of args) {
    if (arg === '--json') json = true;
    else if (arg === '--help' || arg === '-h') {
      process.stdout.write(usage);
      process.exit(0);
    } else if (arg.startsWith('--')) fail(`unknown option ${arg}`);
    else files.push(arg);
  }
  const [file, ...more] = files;
  if (file === undefined) fail('no file given');
  if (more.length > 0) fail('more than one file given');
  return { file, json };
}

function readSource(file: string): string {
  let bytes: Buffer;
  try {
    bytes = readFileSync(file === '-' ? 0 : file);
  } catch (error) {
    fail(`cannot read ${file}: ${error instanceof Error ? error.message : String(error)}`);
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    fail(`${file} is not UTF-8 text`);
  }
}

/** Figures as one line of `name value` pairs; long lists are cut with their length. */
function figuresLine(claim: Claim): string {
  const show = (value: unknown): string => {
    if (Array.isArray(value)) {
      const shown = value.slice(0, 8).map((entry) => show(entry));
      return `[${shown.join(', ')}${value.length > 8 ? `, … ${String(value.length)} in all` : ''}]`;
    }
    if (typeof value === 'number' && !Number.isInteger(value)) {
      return Math.abs(value) < 1e-6 ? value.toExponential(1) : value.toFixed(9).replace(/0+$/, '');
    }
    return typeof value === 'object' && value !== null ? JSON.stringify(value) : String(value);
  };
  const figures = Object.entries(claim.figures).filter(([name]) => name !== 'table' && name !== 'relationList');
  return figures.map(([name, value]) => `${name} ${show(value)}`).join('   ');
}

function claimLines(claim: Claim): string[] {
  const lines = [`  ${gradeMark[claim.grade]} ${claim.grade.padEnd(9)} line ${String(claim.line)}: ${claim.statement}`];
  const figures = figuresLine(claim);
  if (figures) lines.push(`      ${figures}`);
  const words = claim.witness['words'];
  if (typeof words === 'string') lines.push(`      witness: ${words}`);
  for (const caution of claim.cautions) lines.push(`      caution: ${caution}`);
  return lines;
}

function modelLines(name: string, model: Report['models'][string]): string[] {
  const lines = [`  ${name}`];
  for (const term of model.terms) {
    const orbit = term.orbit.map(
      (factor) => `${factor.species}^${factor.pauli}[${factor.cell}(${factor.offset.join(', ')})]`,
    );
    lines.push(`    ${term.coefficient.padEnd(8)} ${orbit.join(' ')}   ${term.kind}`);
  }
  if (model.constant !== '0') lines.push(`    constant ${model.constant}`);
  return lines;
}

/** The report as a page for a terminal. */
function summary(file: string, report: Report): string {
  const lines: string[] = [];
  for (const problem of report.problems) {
    const word = problem.severity === 'error' ? 'error' : 'caution';
    lines.push(`${file}:${String(problem.line)}:${String(problem.column)}: ${word}: ${problem.message}`);
    if (problem.hint) lines.push(`    ${problem.hint}`);
  }
  if (lines.length > 0) lines.push('');
  const models = Object.entries(report.models);
  if (models.length > 0) lines.push('models', ...models.flatMap(([name, model]) => modelLines(name, model)), '');
  if (report.claims.length > 0) {
    lines.push('claims', ...report.claims.flatMap(claimLines), '');
    const count = (grade: Claim['grade']): number => report.claims.filter((claim) => claim.grade === grade).length;
    const counts = (Object.keys(gradeMark) as Claim['grade'][])
      .filter((grade) => count(grade) > 0)
      .map((grade) => `${String(count(grade))} ${grade}`);
    lines.push(`${String(report.claims.length)} claims: ${counts.join(', ')}`);
  }
  return `${lines.join('\n')}\n`;
}

const { file, json } = readArguments(process.argv.slice(2));
const report = newDerivation().derive(readSource(file));
const failed = report.problems.some((problem) => problem.severity === 'error');
// A pipe may take the text in pieces, so the exit status is set rather than forced.
process.exitCode = failed ? 1 : 0;
process.stdout.write(json ? `${JSON.stringify(report)}\n` : summary(file, report));
