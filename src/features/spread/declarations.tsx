import { memo } from 'react';
import { Formula } from '../../components/formula.tsx';
import { GradeMark } from '../../components/marks.tsx';
import { leave, take, togglePin, type Held } from '../../hand/hand.ts';
import { useAnswers, useHandStore } from '../../hand/useHand.ts';
import type { Row } from './row.ts';
import { modelTex, ruleHeld } from './rows.ts';
import type { Open } from './terms.tsx';

type DeclarationRow = Extract<Row, { what: 'declaration' }>;
type ElsewhereRow = Extract<Row, { what: 'elsewhere' }>;
type SettingRow = Extract<Row, { what: 'setting' }>;

interface Props<R> {
  readonly row: R;
  readonly number: string;
  readonly entry: string;
  readonly open: Open | undefined;
}

/** What a thing is, in a word before its name. */
const words: Readonly<Record<string, string>> = {
  operator: 'operator',
  law: 'law',
  symmetry: 'symmetry',
  rule: 'rule',
  map: 'map',
  reference: 'reference state',
};

/** A map or a reference spans both pages; a law, symmetry, operator or rule stands on the page of its language. */
export const Declaration = memo(function Declaration({ row, number, entry, open }: Props<DeclarationRow>) {
  const { declaration } = row;
  const onePage = ['symmetry', 'operator', 'law', 'rule'].includes(declaration.what) && declaration.language !== 'both';
  const spot = { entry, line: row.line, column: 1 };
  return (
    <div className={`pair declared ${row.stale ? 'stale' : ''}`}>
      <span className="entry-number">{number}</span>
      <div className={onePage ? (declaration.language === 'gauge' ? 'page-right' : 'page-left') : 'both-pages'}>
        <span className="declared-name">
          {words[declaration.what]}
          {declaration.rules && <em> {declaration.name}</em>}
        </span>
        {declaration.rules ? (
          <span className="rules">
            {declaration.rules.map((rule, k) => (
              <Holdable
                key={k}
                held={ruleHeld(declaration.name, k)}
                label={k === 0 ? declaration.spoken : `rule ${String(k + 1)} of ${declaration.name}`}
                act={open && (() => open({ ...spot, line: row.line + 1 + k, column: 3 }))}
              >
                <Formula tex={`${rule.left}\\;\\mapsto\\;${rule.right}`} />
              </Holdable>
            ))}
            {declaration.rules.length === 0 && declaration.tex !== '' && <Formula tex={declaration.tex} />}
          </span>
        ) : (
          <Holdable held={row.held} label={declaration.spoken} act={open && (() => open(spot))}>
            <Formula tex={declaration.tex} display />
          </Holdable>
        )}
      </div>
      {row.marks.length > 0 && (
        <span className="declared-marks label">
          {row.marks.map((mark) => (
            <span key={mark.grade} className={`ink-${mark.grade}`} title={mark.words}>
              <GradeMark grade={mark.grade} label="" /> {mark.grade}
            </span>
          ))}
        </span>
      )}
    </div>
  );
});

interface HoldableProps {
  readonly held: Held;
  readonly label: string;
  readonly act: (() => void) | undefined;
  readonly children: React.ReactNode;
}

function Holdable({ held, label, act, children }: HoldableProps) {
  const hand = useHandStore();
  const answers = useAnswers(held);
  return (
    <button
      type="button"
      className="term"
      data-term="left"
      data-answers={answers || undefined}
      aria-label={label}
      onPointerEnter={(event) => {
        if (event.pointerType !== 'touch') hand.set((now) => take(now, held, 'pointer'));
      }}
      onPointerLeave={() => hand.set((now) => leave(now, 'pointer'))}
      onFocus={() => hand.set((now) => take(now, held, 'focus'))}
      onBlur={() => hand.set((now) => leave(now, 'focus'))}
      onKeyDown={(event) => {
        if (event.key !== ' ') return;
        event.preventDefault();
        hand.set((now) => togglePin(now, held));
      }}
      onClick={act ?? (() => hand.set((now) => togglePin(now, held)))}
    >
      {children}
    </button>
  );
}

/** Lattice, spins and couplings of an entry, in one line. */
export const Setting = memo(function Setting({ row, number, entry, open }: Props<SettingRow>) {
  const inside = row.parts.map((part, k) => (
    <span key={k} className="setting-part">
      <Formula tex={part.tex} />
    </span>
  ));
  return (
    <div className={`pair declared ${row.stale ? 'stale' : ''}`}>
      <span className="entry-number">{number}</span>
      <div className="both-pages">
        {open ? (
          <button
            type="button"
            className="term setting"
            data-term="left"
            aria-label={row.parts.map((part) => part.spoken).join('; ')}
            onClick={() => open({ entry, line: row.line, column: 1 })}
          >
            {inside}
          </button>
        ) : (
          <span className="setting">{inside}</span>
        )}
      </div>
    </div>
  );
});

/** The line of an image that is set facing its source: what it is the image of, and the way there. */
export const Elsewhere = memo(function Elsewhere({ row, number, entry, open }: Props<ElsewhereRow>) {
  const inside = (
    <Formula tex={`${modelTex(row.name)} = \\mathit{${row.map.replace(/_/g, '\\_')}}\\,(${modelTex(row.of)})`} />
  );
  return (
    <div className={`pair declared ${row.stale ? 'stale' : ''}`}>
      <span className="entry-number">{number}</span>
      <div className="both-pages">
        {open ? (
          <button
            type="button"
            className="term"
            data-term="left"
            aria-label={`model ${row.name}, the image of ${row.of} under ${row.map}`}
            onClick={() => open({ entry, line: row.line, column: 1 })}
          >
            {inside}
          </button>
        ) : (
          inside
        )}
        <a
          className="label"
          href={`#${row.entry}`}
          onClick={(event) => {
            event.preventDefault();
            const there = document.querySelector<HTMLElement>(`[data-entry="${CSS.escape(row.entry)}"]`);
            there?.scrollIntoView({ block: 'center' });
            there?.focus({ preventScroll: true });
          }}
        >
          set facing {row.of}
        </a>
      </div>
    </div>
  );
});
