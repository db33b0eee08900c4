import { stdSerializers } from 'pino';
import { describe, expect, it } from 'vitest';
import { withoutSecrets, withoutValues } from '../../server/middleware/observe.ts';
import { findByHandle } from '../../server/db/queries/people.ts';
import { server } from './support/client.ts';

describe('what is written down', () => {
  it('when a query fails, then the reason is kept and not the values that people wrote', async () => {
    const here = await server();
    await here.database.pool.query('alter table people rename to gone');
    const failed = await findByHandle(here.database, 'private words').then(
      () => null,
      (error: unknown) => error as Error,
    );
    expect(String(failed?.message)).toContain('private words');
    const kept = JSON.stringify(stdSerializers.err(withoutValues(failed ?? new Error('none'))));
    expect(kept).toContain('relation \\"people\\" does not exist');
    expect(kept).not.toContain('private words');
  });

  it.each([
    ['/api/linked/secret/source', '/api/linked/…/source'],
    ['/shared/secret', '/shared/…'],
    ['/auth/github/callback?code=secret&state=secret', '/auth/github/callback?code=…&state=…'],
    ['/api/shelf?q=ring', '/api/shelf?q=ring'],
  ])('when %s is asked for, then %s is written', (url, written) => {
    expect(withoutSecrets(url)).toBe(written);
  });
});
