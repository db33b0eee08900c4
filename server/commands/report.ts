/**
 * `npm run --silent report -- FILE.gw [--json] [--only AUDITS] [--size SIZES] [--jobs N]`: the report of one source.
 * Exit status: 0 no problems, 1 problems in the source, 2 usage (also a file that cannot be read).
 */
import { readFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { auditNames, type Choice, WrongSizes } from '../../shared/derivation/asked.ts';
import type { Claim, Report } from '../../shared/contracts/report.ts';
import { deriveWhole, type WholeProgress } from '../evaluation/whole.ts';

const usage = `usage: npm run --silent report -- FILE.gw [--json] [--only AUDITS] [--size SIZES] [--jobs N]

  FILE.gw         a source in the operator language; - reads standard input
  --json          print the whole report as one JSON object
  --only AUDITS   answer some audits only, by name, with commas between them: --only map,spectrum
  --size SIZES    ask every audit that knows sizes on these, whatever its line says: --size "3 x 3, 4 x 4"
  --jobs N        answer N numerical questions at a time, each on a thread of its own; 1 where it is not given
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
  readonly choice: Choice;
  readonly threads: number;
}

/** Options that take a value, as the next word or behind `=`. */
const valued = ['--only', '--size', '--jobs'] as const;
type Valued = (typeof valued)[number];

function readArguments(args: readonly string[]): Arguments {
  const files: string[] = [];
  const values = new Map<Valued, string>();
  const rest = [...args];
  let json = false;
  for (let arg = rest.shift(); arg !== undefined; arg = rest.shift()) {
    const [, name = arg, inline] = /^(--\w+)=(.*)$/su.exec(arg) ?? [];
    const option = valued.find((one) => one === name);
    if (option !== undefined) {
      const value = inline ?? rest.shift();
      if (value === undefined || value.trim() === '') fail(`${option} needs a value`);
      values.set(option, value);
    } else if (arg === '--json') json = true;
    else if (arg === '--help' || arg === '-h') {
      process.stdout.write(usage);
      process.exit(0);
    } else if (arg.startsWith('--')) fail(`unknown option ${arg}`);
    else files.push(arg);
  }
  const [file, ...more] = files;
  if (file === undefined) fail('no file given');
  if (more.length > 0) fail('more than one file given');
  const size = values.get('--size');
  const only = readOnly(values.get('--only'));
  const choice = { ...(only ? { only } : {}), ...(size === undefined ? {} : { sizes: size }) };
  return { file, json, choice, threads: readThreads(values.get('--jobs')) };
}

function readOnly(text: string | undefined): readonly string[] | undefined {
  const names = text?.split(',').map((name) => name.trim());
  const unknown = names?.find((name) => !auditNames.includes(name));
  if (unknown !== undefined) fail(`there is no audit ${unknown}; there are ${auditNames.join(', ')}`);
  return names;
}

/** More threads than processors would only take memory. */
function readThreads(text: string | undefined): number {
  const number = Number(text ?? 1);
  if (!Number.isInteger(number) || number < 1) fail(`--jobs is a whole number from 1 on, not ${text ?? ''}`);
  return Math.min(number, availableParallelism());
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

/** How far it is, in one line of the terminal that is written over; nothing where standard error is no terminal. */
function progressLine(): { readonly show: (progress: WholeProgress) => void; readonly clear: () => void } {
  const { stderr } = process;
  if (!stderr.isTTY) return { show: () => undefined, clear: () => undefined };
  const width = 24;
  const began = performance.now();
  let next = 0;
  let shown = false;
  return {
    show({ done, answered, questions, doing }) {
      const now = performance.now();
      if (now < next) return;
      next = now + 100;
      shown = true;
      const full = Math.round(width * done);
      const bar = `${'━'.repeat(full)}${'╌'.repeat(width - full)}`;
      const left = done > 0.02 ? `, ${duration(((now - began) / 1000) * (1 / done - 1))} left` : '';
      const line = `${bar} ${String(answered)} of ${String(questions)}${left}  ${doing}`;
      stderr.write(`\r\u001b[2K${[...line].slice(0, Math.max(40, (stderr.columns || 80) - 1)).join('')}`);
    },
    clear() {
      if (shown) stderr.write('\r\u001b[2K');
    },
  };
}

const duration = (seconds: number): string =>
  seconds < 90 ? `${String(Math.ceil(seconds))} s` : `${String(Math.ceil(seconds / 60))} min`;

async function main(): Promise<void> {
  const { file, json, choice, threads } = readArguments(process.argv.slice(2));
  const source = readSource(file);
  const line = progressLine();
  try {
    const report = await deriveWhole(source, { choice, threads, onProgress: line.show });
    line.clear();
    const failed = report.problems.some((problem) => problem.severity === 'error');
    // A pipe may take the text in pieces, so the exit status is set rather than forced.
    process.exitCode = failed ? 1 : 0;
    process.stdout.write(json ? `${JSON.stringify(report)}\n` : summary(file, report));
  } catch (error) {
    line.clear();
    if (error instanceof WrongSizes) fail(error.message);
    throw error;
  }
}

// Ctrl-C is left to the system, which ends this process and its threads at once, whatever they are doing.
await main();
