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
    expect(await titles('mitsuno')).toEqual([[magnet, 'referee']]);
    expect(await titles('tvasara')).toEqual(
      expect.arrayContaining([
        [copy, 'owner'],
        [ring, 'reader'],
      ]),
    );
    const { items } = await visitor(here).ask('listPublic');
    expect(items.map((item) => [item.title, item.edition])).toEqual([[magnet, 2]]);

    const owner = await person(here, 'rokafor');
    await owner.ask('deleteNotebook', { params: { notebook: items[0]?.id ?? '' } });
    await writeDemo(settings);
    expect((await visitor(here).ask('listPublic')).items).toEqual([]);
  });

  it('when no stand-in is on, then nothing is written', async () => {
    const here = await server();
    await writeDemo(settingsFor(here.databaseUrl, { FAKES: '' }));
    const { rows } = await here.database.pool.query('select 1 from people');
    expect(rows).toEqual([]);
  });

  it.each(inventedNotebooks.map((notebook) => [notebook.summary, notebook] as const))(
    'when the engine reads “%s”, then it finds no problem, and refutes what the text calls wrong and nothing else',
    (_, { source, then }) => {
      const entries = [...notebookFromText(source).entries, ...(then?.add ?? [])];
      const report = newDerivation().derive(joinEntries(entries).text);
      expect(report.problems).toEqual([]);
      expect(report.claims.length).toBeGreaterThan(4);
      const refuted = report.claims.filter((claim) => claim.grade === 'refuted').map((claim) => claim.subject);
      expect(refuted).toEqual(source.includes('hasty') ? ['hasty'] : []);
    },
  );
});
