import type {
  Clause,
  ClauseName,
  Expression,
  LabelNode,
  Path,
  RangeNode,
  Span,
  Statement,
  SubjectNode,
} from '../../grammar/syntax.ts';
import { Coefficient } from '../algebra/numbers/coefficient.ts';
import type { Size } from '../lattice/cells.ts';
import { dotted } from './calls.ts';
import { sizesOf } from './declare-lattice.ts';
import type { AuditForm } from './forms.ts';
import { fail, say, whatIsIt } from './problem.ts';
import type {
  AuditStatement,
  MapDeclaration,
  Place,
  ScanRange,
  SectorLabel,
  Subject,
  Value,
  Values,
} from './values.ts';

type AuditNode = Statement & { readonly type: 'audit' };
type Of<N extends ClauseName> = Clause & { readonly name: N };

/** What the judging of an audit line needs beside the line. */
export interface AuditScene {
  readonly values: Values;
  readonly forms: readonly AuditForm[];
  /** Evaluates a constant. */
  readonly constant: (node: Expression) => Coefficient;
  /** A declared name: its value; `broken` throws what marks the line as waiting; unknown names fail. */
  readonly named: (path: Path) => Value;
  readonly placeOf: (node: Span) => Place;
  readonly text: string;
}

const mostLevels = 1024;

/** A state map, or what undoes one: it has an image that can be a sector. */
const isStates = (declaration: MapDeclaration): boolean =>
  declaration.kind === 'states' || (declaration.kind === 'inverse' && isStates(declaration.of.declaration));
const mostOrder = 8;
const mostPoints = 2_000;

function ofKind(path: Path, kinds: readonly Value['what'][], audit: string, scene: AuditScene): Value {
  const value = scene.named(path);
  if (kinds.includes(value.what)) return value;
  const wanted = kinds.map((k) => whatIsIt[k] ?? k);
  return fail(say.auditKind(audit, dotted(path), whatIsIt[value.what] ?? value.what, wanted), path);
}

function label(node: LabelNode, scene: AuditScene): SectorLabel {
  const value = scene.named(node.path);
  const name = dotted(node.path);
  const kinds: readonly Value['what'][] = ['law', 'symmetry', 'rule', 'map', 'operator'];
  const states = value.what !== 'map' || isStates(value.declaration);
  if (!kinds.includes(value.what) || !states) fail(say.sectorKind(name, whatIsIt[value.what] ?? value.what), node.path);
  if (node.value === undefined) return { name, value: undefined, place: scene.placeOf(node) };
  if (value.what === 'rule' || value.what === 'map') return fail(say.sectorRule(name), node);
  if (node.value !== 1 && node.value !== -1) return fail(say.sectorValue(), node);
  return { name, value: node.value, place: scene.placeOf(node) };
}

function subject(node: SubjectNode, form: AuditForm, scene: AuditScene): Subject {
  ofKind(node.path, form.operands, form.name, scene);
  const [first] = node.sector;
  if (first && !form.sector) return fail(say.sectorHere(form.name), first);
  return { name: dotted(node.path), sector: node.sector.map((l) => label(l, scene)), place: scene.placeOf(node) };
}

/** The values of a range: from the first upward, the last included when it falls on the grid. */
function points(range: RangeNode, scene: AuditScene): Coefficient[] {
  const from = scene.constant(range.from);
  if (!range.to || !range.by) return [from];
  const to = scene.constant(range.to);
  const by = scene.constant(range.by);
  const span = { start: range.from.start, end: range.by.end };
  const [low, high, step] = [from, to, by].map((c) => c.toFloat().re) as [number, number, number];
  if (!(step > 0) || high < low) return fail(say.rangeEmpty(), span);
  const steps = Math.floor((high - low) / step + 1e-9);
  if (steps + 1 > mostPoints) return fail(say.rangeLong(mostPoints), span);
  return Array.from({ length: steps + 1 }, (_, k) => from.add(by.mul(Coefficient.rational(k))));
}

function ranges(clause: Of<'over'> | undefined, scene: AuditScene): ScanRange[] {
  const seen = new Set<string>();
  return (clause?.ranges ?? []).map((range) => {
    const { text } = range.coupling;
    const path: Path = { words: [range.coupling], start: range.coupling.start, end: range.coupling.end };
    ofKind(path, ['coupling'], 'scan', scene);
    if (seen.has(text)) fail(say.rangeTwice(text), range.coupling);
    seen.add(text);
    return { coupling: text, points: points(range, scene) };
  });
}

function wholeNumber(clause: Of<'levels'> | Of<'order'> | undefined, most: number): number | undefined {
  if (!clause) return undefined;
  const n = Number(clause.number.text);
  return Number.isInteger(n) && n >= 1 && n <= most ? n : fail(say.count(clause.name, most), clause.number);
}

function sizes(clause: Of<'on'> | undefined, scene: AuditScene): Size[] {
  if (!clause) return [];
  const { lattice } = scene.values;
  return lattice ? sizesOf(clause.sizes, lattice) : fail(say.noLattice(), clause);
}

/** Clauses by name, each once, none that the form does not have, all that it needs. */
function clausesOf(node: AuditNode, form: AuditForm): Map<ClauseName, Clause> {
  const found = new Map<ClauseName, Clause>();
  for (const clause of node.clauses) {
    const known = form.clauses[clause.name] !== undefined || form.subject === clause.name;
    if (!known) fail(say.clauseUnknown(form.name, clause.name, form.example), clause);
    if (found.has(clause.name)) fail(say.clauseTwice(clause.name), clause);
    found.set(clause.name, clause);
  }
  for (const [name, how] of Object.entries(form.clauses))
    if (how === 'need' && !found.has(name as ClauseName))
      fail(say.clauseMissing(form.name, name, form.example), { start: node.end, end: node.end + 1 });
  return found;
}

/** What is measured: a word of the audit or a declared operator. */
function quantityOf(node: AuditNode, form: AuditForm, scene: AuditScene): string | undefined {
  if (!form.quantity) return undefined;
  const [first, second] = node.subjects;
  if (!first)
    return fail(say.auditSubjects(form.name, form.example), { start: node.audit.end, end: node.audit.end + 1 });
  if (second) return fail(say.auditMany(form.name), second);
  const [label] = first.sector;
  if (label) fail(say.sectorHere(form.name), label);
  const name = dotted(first.path);
  if (form.quantity.words.includes(name)) return name;
  ofKind(first.path, form.quantity.kinds, form.name, scene);
  return name;
}

function subjectsOf(
  node: AuditNode,
  form: AuditForm,
  clauses: ReadonlyMap<ClauseName, Clause>,
  scene: AuditScene,
): Subject[] {
  if (form.subject !== 'list') {
    if (!form.quantity && node.subjects[0])
      return fail(say.expected('A name', [`"${form.subject}"`], `It reads ${form.example}.`), node.subjects[0]);
    const clause = clauses.get(form.subject);
    if (!clause || !('subject' in clause))
      return fail(say.clauseMissing(form.name, form.subject, form.example), { start: node.end, end: node.end + 1 });
    return [subject(clause.subject, form, scene)];
  }
  const [, second] = node.subjects;
  if (node.subjects.length === 0)
    return fail(say.auditSubjects(form.name, form.example), { start: node.audit.end, end: node.audit.end + 1 });
  if (second && !form.many) return fail(say.auditMany(form.name), second);
  return node.subjects.map((s) => subject(s, form, scene));
}

/** An audit line, held against the form of its audit. */
export function declareAudit(node: AuditNode, scene: AuditScene): AuditStatement {
  const form = scene.forms.find((f) => f.name === node.audit.text);
  if (!form)
    return fail(
      say.unknownAudit(
        node.audit.text,
        scene.forms.map((f) => f.name),
      ),
      node.audit,
    );
  const clauses = clausesOf(node, form);
  const get = <N extends ClauseName>(name: N): Of<N> | undefined => clauses.get(name) as Of<N> | undefined;
  const withPaths = get('with')?.paths ?? [];
  const from = get('from')?.path;
  const against = get('~');
  const quantity = quantityOf(node, form, scene);
  const withNames = withPaths.map((path) => {
    ofKind(path, form.withKinds, form.name, scene);
    return dotted(path);
  });
  if (from) ofKind(from, form.withKinds, form.name, scene);
  return {
    audit: form.name,
    place: scene.placeOf(node),
    text: scene.text,
    subjects: subjectsOf(node, form, clauses, scene),
    withNames: form.quantity ? [] : withNames,
    against: against && subject(against.subject, form, scene),
    sizes: sizes(get('on'), scene),
    levels: wholeNumber(get('levels'), mostLevels),
    order: wholeNumber(get('order'), mostOrder),
    from: from && dotted(from),
    quantity,
    reference: form.quantity ? withNames[0] : undefined,
    over: ranges(get('over'), scene),
  };
}
