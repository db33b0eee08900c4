import { beforeAll, describe, expect, it } from 'vitest';
import { notebookFromText } from '../../shared/notebook/text.ts';
import { type Client, person, type Server, server, visitor } from './support/client.ts';

describe('the catalogue of worked derivations', () => {
  let here: Server;
  let owner: Client;
  beforeAll(async () => {
    here = await server();
    owner = await person(here, 'rokafor');
  });

  it('is open to visitors, and lists no texts', async () => {
    const { items } = await visitor(here).ask('listWorked');
    expect(items.length).toBeGreaterThanOrEqual(12);
    expect(items.every((one) => !('source' in one))).toBe(true);
  });

  it('when a text is taken as it stands, then a notebook has its title and every entry', async () => {
    const { items } = await owner.ask('listWorked');
    for (const { name, title } of items) {
      const { source } = await owner.ask('getWorked', { params: { worked: name } });
      const made = await owner.ask('importNotebook', { body: { source } });
      expect(made.title).toBe(title);
      expect(made.entries.map(({ kind, text }) => ({ kind, text }))).toEqual(notebookFromText(source).entries);
    }
  });

  it('when the name is unknown or no name at all, then there is nothing', async () => {
    for (const name of ['no-such-derivation', '..%2Findex', 'INDEX']) {
      const response = await owner.fetch(`/api/catalogue/${name}`);
      expect(response.status).toBe(404);
    }
  });
});
