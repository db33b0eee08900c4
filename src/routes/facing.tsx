import { lazy, type ReactNode, Suspense, useState } from 'react';
import { Guard } from '../components/faces.tsx';
import { printed } from '../components/typography.ts';
import { Key } from '../features/margin/key.tsx';
import type { Margin } from '../features/margin/margin.tsx';
import { Contents } from '../features/spread/contents.tsx';
import type { EntryText } from '../features/spread/entry.tsx';
import { CoverLine, TableOfClaims } from '../features/spread/printed.tsx';
import type { EntryRows } from '../features/spread/row.ts';
import { type Edits, Spread } from '../features/spread/spread.tsx';
import { HandContext, type HandStore, newHandStore } from '../hand/useHand.ts';
import { ReadingContext } from '../reading/inView.ts';
import type { Reading } from '../reading/state.ts';
import { claimsOf } from './audit-figures.tsx';

/** The plate overlays the foot of the page: coming a moment later it moves nothing. */
const Plate = lazy(() => import('../features/plate/plate.tsx').then(({ Plate }) => ({ default: Plate })));

const nobody: ReadonlyMap<string, string> = new Map();

interface Props {
  readonly head: ReactNode;
  readonly entries: readonly EntryText[];
  readonly reading: Reading;
  readonly rows: readonly EntryRows[];
  readonly writing?: string | null;
  readonly source?: (entry: EntryText) => ReactNode;
  readonly edits?: Edits | undefined;
  readonly heldBy?: ReadonlyMap<string, string>;
  /** Above the key, under the contents. */
  readonly strip?: ReactNode;
  /** The remarks beside the entries, where there are people to remark. */
  readonly margin?: Margin;
  readonly foot: ReactNode;
  /** What is printed above the title, to cite by; the title's own page says it otherwise. */
  readonly cover?: string;
  /** Adds statements to the notebook, from the plate. */
  readonly write?: ((text: string) => void) | undefined;
  readonly hand?: HandStore;
}

const noSource = () => null;

/** A derivation as it is read: title, facing pages, the outer strips, the plate. Notebook, edition and example all look so. */
export function Facing(props: Props) {
  const [own] = useState(newHandStore);
  const { head, entries, reading, rows, edits, strip, margin, foot } = props;
  return (
    <HandContext value={props.hand ?? own}>
      <main id="page" tabIndex={-1} className="sheet three-strips">
        <header className="title-block">
          {props.cover !== undefined && <CoverLine words={props.cover} />}
          {head}
        </header>
        <div className="strip-left">
          <div>
            <Contents entries={entries} rows={rows} />
            <Guard what="The key could not be shown." until={reading.answered}>
              {reading.waiting > 0 && (
                <p role="status" className="mt-4">
                  {reading.waiting === 1 ? 'One numerical answer' : `${String(reading.waiting)} numerical answers`}{' '}
                  under way
                </p>
              )}
              <div className="mt-6">
                {strip}
                <Key slices={reading.slices} />
              </div>
            </Guard>
          </div>
        </div>
        <div className="middle">
          {reading.failed !== undefined && (
            <p role="alert" className="ink-refuted mb-3">
              {reading.failed}
            </p>
          )}
          <ReadingContext value={reading}>
            <Spread
              entries={entries}
              reading={reading}
              rows={rows}
              writing={props.writing ?? null}
              source={props.source ?? noSource}
              claims={claimsOf}
              edits={edits}
              heldBy={props.heldBy ?? nobody}
              marginHead={margin?.head}
              beside={margin?.beside}
            />
          </ReadingContext>
          {margin?.gone}
          {foot}
          <TableOfClaims slices={reading.slices} printed={printed} />
        </div>
      </main>
      <Guard what="The plate could not be drawn." until={reading.answered}>
        <Suspense fallback={null}>
          <Plate reading={reading} write={props.write} />
        </Suspense>
      </Guard>
    </HandContext>
  );
}
