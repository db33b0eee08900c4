import { describe, expect, it } from 'vitest';
import { writeDemo } from '../../server/commands/demo.ts';
import { inventedNotebooks } from '../../server/fakes/notebooks.ts';
import { newDerivation } from '../../shared/derivation/derive.ts';
import { joinEntries, notebookFromText } from '../../shared/notebook/text.ts';
import { person, server, settingsFor, visitor } from './support/client.ts';

describe('the demonstration', () => {
  it('when it is written, also twice, then its people find their notebooks once, and what was deleted stays so', async () => {
    const here = await server();
    const settings = settingsFor(here.databaseUrl);
    await writeDemo(settings);
    await writeDemo(settings);
    const titles = async (login: string) =>
      (await (await person(here, login)).ask('listShelf')).items.map((item) => [item.title, item.role]);
    const [magnet, ring, copy] = [
      'Gauging the flip of an uneven square magnet',
      'A ring, its walls, and a step taken in haste',
      'Reading group: bonds of the uneven magnet',
    ];
    expect(await titles('rokafor')).toEqual(
      expect.arrayContaining([
        [magnet, 'owner'],
        [ring, 'referee'],
      ]),
    );
    expect(await titles('mitsuno')).toEqual(expect.arrayContaining([[magnet, 'referee']]));
    expect((await (await person(here, 'ysandoval')).ask('getMe')).may).toContain('steward');
    const written = await here.database.pool.query<{ notebooks: number; drafts: number }>(
      `select count(*)::int as notebooks, (count(*) filter (where not exists
        (select 1 from editions where notebook = notebooks.id)))::int as drafts from notebooks`,
    );
    expect(written.rows).toEqual([{ notebooks: 6, drafts: 2 }]);
    expect(await titles('tvasara')).toEqual(
      expect.arrayContaining([
        [copy, 'owner'],
        [ring, 'reader'],
      ]),
    );
    const waiting = await here.database.pool.query<{ kind: string; told: number }>(
      `select kind, count(*)::int as told from notices where kind in ('remark', 'mention', 'variants') group by kind`,
    );
    expect(new Set(waiting.rows.map(({ kind }) => kind))).toEqual(new Set(['remark', 'mention', 'variants']));

    const { items } = await visitor(here).ask('listPublic');
    expect(items.map((item) => [item.title, item.edition])).toContainEqual([magnet, 2]);
    const shown = items.find((item) => item.title === magnet);

    const owner = await person(here, 'rokafor');
    await owner.ask('deleteNotebook', { params: { notebook: shown?.id ?? '' } });
    await writeDemo(settings);
    expect((await visitor(here).ask('listPublic')).items.map((item) => item.title)).not.toContain(magnet);
  });

  it('when no stand-in is on, then nothing is written', async () => {
    const here = await server();
    await writeDemo(settingsFor(here.databaseUrl, { FAKES: '' }));
    const { rows } = await here.database.pool.query('select 1 from people');
    expect(rows).toEqual([]);
  });

  it.each(inventedNotebooks.map((notebook) => [notebook.source.split('\n')[0], notebook] as const))(
    'when the engine reads “%s”, then it finds no problem, and refutes what the text calls wrong and nothing else',
    (_, { source, then }) => {
      const entries = [...notebookFromText(source).entries, ...(then?.add ?? [])];
      const report = newDerivation().derive(joinEntries(entries).text);
      expect(report.problems).toEqual([]);
      expect(report.claims.length).toBeGreaterThan(2);
      expect(report.claims.filter((claim) => claim.grade === 'open')).toEqual([]);
      const refuted = report.claims.filter((claim) => claim.grade === 'refuted').map((claim) => claim.subject);
      expect(refuted).toEqual(source.includes('hasty') ? ['hasty'] : []);
    },
  );
});
