import { memo, type ReactNode, useSyncExternalStore } from 'react';
import type { Claim } from '../../../shared/contracts/report.ts';
import { number, sizeWords } from './axes.tsx';
import {
  groundsOf,
  groundsTable,
  type LevelsOnSize,
  type Scan,
  scansOf,
  scansTable,
  spectraOf,
  spectraTable,
} from './data.ts';
import { Grounds, grounds as groundsBox, LevelsPanel, lines, panelsAcross, panelsBox, ScanLines } from './drawings.tsx';
import { Figure } from './figure.tsx';
import { contourAt, heat, HeatMap, steepest } from './heat.tsx';

interface Props {
  readonly claims: readonly Claim[];
  /** A caution as the page prints it. */
  readonly say: (sentence: string) => ReactNode;
}

const list = (words: readonly string[]): string =>
  words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words.at(-1) ?? ''}`;

const onSizes = (all: readonly { readonly size: string }[]): string => list(all.map(({ size }) => sizeWords(size)));

const fileName = (claim: Claim | undefined): string =>
  `${claim?.audit ?? 'plot'}-${(claim?.subject ?? '').replace(/[^\p{L}\p{N}]+/gu, '-')}`;

const narrow = globalThis.matchMedia('(max-width: 759px)');
const onNarrow = (heard: () => void) => {
  narrow.addEventListener('change', heard);
  return () => narrow.removeEventListener('change', heard);
};
const useNarrow = (): boolean => useSyncExternalStore(onNarrow, () => narrow.matches);

/** What the numerical claims of one audit line look like; nothing for other claims. */
export const Plots = memo(function Plots({ claims, say }: Props) {
  const across = panelsAcross(useNarrow());
  const spectra = spectraOf(claims);
  const scans = scansOf(claims);
  const grounds = groundsOf(claims);
  const name = fileName(claims[0]);
  const cautions = [...new Set(claims.flatMap((claim) => claim.cautions))].map((caution) =>
    say(/[.!?]$/.test(caution) ? caution : `${caution}.`),
  );
  if (spectra.length > 0)
    return (
      <Figure
        words={spectraWords(spectra)}
        {...{ cautions, name }}
        table={spectraTable(spectra)}
        {...panelsBox(spectra.length, across)}
      >
        {spectra.map((levels, k) => (
          <LevelsPanel key={k} levels={levels} place={k} across={across} />
        ))}
      </Figure>
    );
  if (grounds.length > 0) {
    const words = `Ground states of ${claims[0]?.subject ?? ''} and the next level on ${onSizes(grounds)}: ${list(
      grounds.map(({ degeneracy, size }) => `${String(degeneracy)} on ${sizeWords(size)}`),
    )}.`;
    return (
      <Figure words={words} {...{ cautions, name }} table={groundsTable(grounds)} {...groundsBox}>
        <Grounds all={grounds} />
      </Figure>
    );
  }
  const flat = scans.filter((scan) => scan.moving.length === 1);
  const wide = scans.filter((scan) => scan.moving.length === 2);
  return (
    <>
      {flat.length > 0 && (
        <Figure words={scanWords(flat, claims)} {...{ cautions, name }} table={scansTable(flat)} {...lines}>
          <ScanLines scans={flat} />
        </Figure>
      )}
      {wide.map((scan, k) => (
        <Figure
          key={k}
          words={heatWords(scan, claims)}
          {...{ cautions }}
          name={`${name}-${scan.size.replace(/\W+/g, '-')}`}
          table={scansTable([scan])}
          {...heat}
        >
          <HeatMap scan={scan} />
        </Figure>
      ))}
    </>
  );
});

function spectraWords(spectra: readonly LevelsOnSize[]): string {
  const [left = '', right = ''] = spectra[0]?.names ?? [];
  const apart = spectra.filter(({ agree }) => !agree);
  const verdict =
    apart.length === 0
      ? 'Dotted lines join levels that agree'
      : `They differ on ${onSizes(apart)}, where the lines between them slope`;
  return `Levels of ${left} and of ${right} on ${onSizes(spectra)}. ${verdict}; ×n marks n equal levels.`;
}

function scanWords(scans: readonly Scan[], claims: readonly Claim[]): string {
  const [first] = scans;
  return `The ${first?.quantity ?? ''} of ${claims[0]?.subject ?? ''} over ${first?.moving[0] ?? ''} on ${onSizes(scans)}.`;
}

function heatWords(scan: Scan, claims: readonly Claim[]): string {
  const [a = '', b = ''] = scan.moving;
  const most = steepest(scan);
  const where =
    most && most.value > 0
      ? ` It changes fastest at ${a} = ${number(most.x)}, ${b} = ${number(most.y)} (ringed); the line encloses where its change is at least ${contourAt === 0.5 ? 'half' : String(contourAt)} of that.`
      : '';
  return `The ${scan.quantity} of ${claims[0]?.subject ?? ''} over ${a} and ${b} on ${sizeWords(scan.size)}, deeper ink for larger values.${where}`;
}
