import type { EditionContent } from '../contracts/editions.ts';
import type { Claim, Report } from '../contracts/report.ts';
import { joinEntries, type Lines } from '../notebook/text.ts';
import { latexInline, latexListing, latexMath, latexProse, latexText } from './latex-text.ts';

export interface ArticleSource {
  readonly content: Pick<EditionContent, 'title' | 'authors' | 'entries'>;
  readonly report: Report | null;
  /** Number, hash and address of the edition; null for a working text. */
  readonly edition: {
    readonly number: number;
    readonly hash: string;
    readonly address: string;
    readonly date: string;
  } | null;
}

const preamble = String.raw`\documentclass[11pt]{article}
\usepackage[T1]{fontenc}
\usepackage[utf8]{inputenc}
\usepackage{textcomp}
\usepackage{amsmath}
\usepackage{amssymb}
\usepackage{longtable}
\usepackage[hidelinks]{hyperref}
% Pauli letters, marked as on the page.
\providecommand{\px}[1]{#1}
\providecommand{\py}[1]{#1}
\providecommand{\pz}[1]{#1}
\setlength{\parindent}{0pt}
\setlength{\parskip}{0.6em}
\emergencystretch=3em
`;

/**
 * A notebook as a LaTeX article for the class article with amsmath and hyperref: its prose, its models and declarations as formulas,
 * its claims as a table with their grades, and its source letter for letter at the end. Whatever people wrote, it compiles.
 */
export function article({ content, report, edition }: ArticleSource): string {
  const { text, lines } = joinEntries(content.entries);
  const body = content.entries.map((entry, at) =>
    entry.kind === 'prose' ? latexProse(entry.text) : formulas(report, lines[at], entry.text),
  );
  const date = edition === null ? 'Working text' : `Edition ${String(edition.number)}, ${edition.date.slice(0, 10)}`;
  return [
    preamble,
    `\\title{${latexText(content.title)}}`,
    `\\author{${content.authors.map(latexText).join(' \\and ')}}`,
    `\\date{${latexText(date)}}`,
    '\\begin{document}',
    '\\maketitle',
    edition === null ? '' : colophon(edition),
    ...body,
    report === null ? '' : claimTable(report),
    '\\section*{Source}',
    latexListing(text.replace(/\n$/, '').split('\n')),
    '\\end{document}',
    '',
  ].join('\n');
}

const colophon = ({ address, hash }: NonNullable<ArticleSource['edition']>): string =>
  `\\begin{flushleft}\\small\n\\url{${address}}\\\\\nSHA-256 of its text: \\texttt{${hash.slice(0, 32)}}\\\\*\n\\texttt{${hash.slice(32)}}\n\\end{flushleft}\n`;

/** The formulas of an entry of statements; its text where the engine set none. */
function formulas(report: Report | null, span: Lines | undefined, text: string): string {
  const within = (line: number): boolean => span !== undefined && span.first <= line && line <= span.last;
  const named = [
    ...(report?.declarations ?? []).map(({ line, tex }) => ({ line, tex })),
    ...Object.entries(report?.models ?? {}).map(([name, { line, tex, constant }]) => ({
      line,
      tex: `H_{\\text{${name}}} = ${tex}${constant === '0' ? '' : `\\quad (\\text{constant } ${constant})`}`,
    })),
  ];
  const own = named.filter(({ line }) => within(line)).sort((a, b) => a.line - b.line);
  const set = own.flatMap(({ tex }) => {
    const math = latexMath(tex);
    return math === null ? [] : [math];
  });
  if (set.length === 0) return latexListing(text.split('\n'));
  // multline breaks what is too long for a line; where to break it is for whoever edits the article.
  return `${set.map((tex) => `\\begin{equation*}\n${tex}\n\\end{equation*}`).join('\n')}\n`;
}

function claimTable({ claims, engine }: Report): string {
  if (claims.length === 0) return '';
  const row = (claim: Claim, at: number): string => {
    const cautions = claim.cautions.map((caution) => `\\newline\\emph{${latexInline(caution)}}`).join('');
    return `${String(at + 1)} & ${latexInline(claim.tex === '' ? claim.statement : claim.tex)}${cautions} & ${claim.grade} \\\\`;
  };
  return [
    '\\section*{Claims}',
    `Computed by engine ${latexText(engine)}.`,
    '\\begin{longtable}{r p{0.72\\textwidth} l}',
    '\\hline',
    ' & claim & grade \\\\',
    '\\hline',
    '\\endhead',
    ...claims.map(row),
    '\\hline',
    '\\end{longtable}',
    ...sourcesOf(claims),
  ].join('\n');
}

function sourcesOf(claims: readonly Claim[]): string[] {
  const sources = [...new Set(claims.flatMap((claim) => claim.sources))];
  if (sources.length === 0) return [];
  return [
    '\\subsection*{Methods}',
    '\\begin{itemize}',
    ...sources.map((source) => `\\item ${latexInline(source)}`),
    '\\end{itemize}',
  ];
}
