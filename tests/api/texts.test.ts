import { expect, it } from 'vitest';
import { person, server } from './support/client.ts';

it('when a working text is compared, then a worker evaluates it, and the comparison is whole soon after', async () => {
  const here = await server({ EVALUATION: 'here' });
  const owner = await person(here, 'rokafor');
  const text = 'lattice chain torus 4\nspins s on vertices\nmodel m = - sum(v: vertices) s^x[v]';
  const entries = [{ kind: 'statements' as const, text }];
  const { id: notebook } = await owner.ask('createNotebook', { body: { title: 'Chain', entries } });
  await owner.ask('publishEdition', { params: { notebook }, body: { summary: 'First' } });
  const asked = { params: { notebook }, query: { left: '1', right: 'draft' } };
  let found = await owner.ask('compare', asked);
  while (found.physics === null) {
    await new Promise((resolve) => setTimeout(resolve, 100));
    found = await owner.ask('compare', asked);
  }
  expect(found.physics).toEqual({ models: [], declarations: [], claims: [] });
  expect([found.left.problems, found.right.problems]).toEqual([0, 0]);
});
