import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Entry } from '../../shared/contracts/notebooks.ts';
import {
  changed,
  choose,
  noDrafts,
  notSaved,
  recovered,
  saved,
  savingInWords,
  sending,
  textOf,
  toSend,
  typed,
} from '../../src/features/writing/drafts.ts';

const entry = (text: string, version: number): Entry => ({
  id: '6d1f6c1e-0000-4000-8000-000000000001',
  kind: 'statements',
  text,
  version,
  hold: null,
  changedBy: null,
  changedAt: '2026-12-01T00:00:00Z',
});
const { id } = entry('', 1);

describe('drafts', () => {
  it('what is saved already leaves no draft', () => {
    expect(typed(noDrafts, entry('a', 1), 'a')).toBe(noDrafts);
    expect(savingInWords(noDrafts)).toBe('all saved');
  });

  it('what is typed while a save is on its way goes out next, on the new version', () => {
    let drafts = sending(typed(noDrafts, entry('', 1), 'a'), id);
    drafts = typed(drafts, entry('', 1), 'ab');
    expect(toSend(drafts)).toEqual([]);
    drafts = saved(drafts, id, 2);
    expect(drafts.get(id)).toMatchObject({ text: 'ab', base: 2, state: 'typed' });
    expect(saved(sending(drafts, id), id, 3).size).toBe(0);
  });

  it('waits without a connection and goes out again when asked to', () => {
    const drafts = notSaved(sending(typed(noDrafts, entry('', 1), 'a'), id), id, 'waiting', 'no connection');
    expect(toSend(drafts)).toEqual([]);
    expect(toSend(drafts, true)).toEqual([id]);
    expect(savingInWords(drafts)).toMatch(/kept on this device/);
  });

  it('keeps both texts, and sends mine on top of theirs once chosen', () => {
    const drafts = changed(sending(typed(noDrafts, entry('', 1), 'mine'), id), id, entry('theirs', 5));
    expect(drafts.get(id)).toMatchObject({ text: 'mine', state: 'changed', theirs: { text: 'theirs' } });
    expect(toSend(drafts, true)).toEqual([]);
    expect(choose(drafts, id, 'mine').get(id)).toMatchObject({ text: 'mine', base: 5, state: 'typed' });
    expect(choose(drafts, id, 'theirs').size).toBe(0);
  });

  it('a copy on the device is a draft again, or a conflict when someone saved since', () => {
    const kept = new Map([[id, { text: 'mine', base: 3 }]]);
    expect(recovered(kept, [entry('old', 3)]).get(id)?.state).toBe('typed');
    expect(recovered(kept, [entry('theirs', 4)]).get(id)?.state).toBe('changed');
    expect(recovered(kept, [entry('mine', 4)]).size).toBe(0);
  });

  it('never loses what was typed last, whatever the server and the connection do', () => {
    const step = fc.oneof(
      fc.record({ do: fc.constant('type' as const), text: fc.string({ maxLength: 4 }) }),
      fc.record({ do: fc.constantFrom('send' as const, 'answer' as const, 'fail' as const, 'elsewhere' as const) }),
    );
    fc.assert(
      fc.property(fc.array(step, { maxLength: 25 }), (steps) => {
        let drafts = noDrafts;
        let server = entry('', 1);
        let last = '';
        for (const one of steps) {
          const draft = drafts.get(id);
          if (one.do === 'type') {
            last = one.text;
            drafts = typed(drafts, server, one.text);
          } else if (one.do === 'send' && toSend(drafts).includes(id)) drafts = sending(drafts, id);
          else if (one.do === 'answer' && draft?.state === 'sending') {
            if (draft.base !== server.version) drafts = changed(drafts, id, server);
            else {
              server = entry(draft.sent ?? '', server.version + 1);
              drafts = saved(drafts, id, server.version);
            }
          } else if (one.do === 'fail' && draft?.state === 'sending') drafts = notSaved(drafts, id, 'waiting', 'gone');
          else if (one.do === 'elsewhere' && draft) server = entry('theirs', server.version + 1);
          expect(textOf(drafts, server)).toBe(last);
        }
      }),
      { seed: 20261201, numRuns: 400 },
    );
  });
});
