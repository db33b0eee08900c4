import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { type AccountPage, changeAccountSchema } from '../../../shared/contracts/people.ts';
import { call } from '../../api/client.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Choice, Field, Part } from '../../components/parts.tsx';

const orNull = (text: string): string | null => (text.trim() === '' ? null : text.trim());

/** How one is named on notebooks and editions. The schema that the server parses with says here what is wrong, field by field. */
export function Profile({ account }: { account: AccountPage }) {
  const client = useQueryClient();
  const [name, setName] = useState(account.name);
  const [handle, setHandle] = useState(account.handle);
  const [affiliation, setAffiliation] = useState(account.affiliation ?? '');
  const [orcid, setOrcid] = useState(account.orcid ?? '');
  const [email, setEmail] = useState(account.email ?? account.addresses[0] ?? '');
  const typed = {
    name,
    handle,
    affiliation: orNull(affiliation),
    orcid: orNull(orcid),
    ...(email === '' || email === account.email ? {} : { email }),
  };
  const parsed = changeAccountSchema.safeParse(typed);
  const wrong = (field: string): string | undefined =>
    parsed.error?.issues.find((issue) => issue.path[0] === field)?.message;
  const save = useAttempt(async () => {
    client.setQueryData(['account'], await call('changeAccount', { body: typed }));
    await client.invalidateQueries({ queryKey: ['me'] });
  });
  const about = (field: string, hint?: string) => {
    const said = wrong(field);
    return said !== undefined ? { hint: said, 'aria-invalid': true } : hint !== undefined ? { hint } : {};
  };
  return (
    <Part title="Profile">
      <form
        className="max-w-xl space-y-4"
        onSubmit={(event) => {
          event.preventDefault();
          if (parsed.success) save.run();
        }}
      >
        <Field
          label="Name, as it is printed"
          autoComplete="name"
          value={name}
          set={setName}
          maxLength={120}
          {...about('name')}
        />
        <Field
          label="Handle, by which others add and mention you"
          autoComplete="username"
          value={handle}
          set={setHandle}
          {...about('handle')}
        />
        <Field
          label="Affiliation"
          autoComplete="organization"
          value={affiliation}
          set={setAffiliation}
          maxLength={200}
          {...about('affiliation')}
        />
        <Field
          label="ORCID iD"
          value={orcid}
          set={setOrcid}
          {...about('orcid', 'Sixteen digits, like 0000-0002-1825-0097; its address will do.')}
        />
        {account.addresses.length > 0 && (
          <Choice
            label="Mail goes to"
            value={email}
            options={account.addresses.map((one) => [one, one] as const)}
            choose={setEmail}
          />
        )}
        <p>
          <button type="submit" className="act" disabled={save.busy || !parsed.success}>
            save the profile
          </button>{' '}
          <span role="status" className="label">
            {save.done > 0 && !save.busy && save.failed === null && 'saved'}
          </span>
        </p>
        <Attempt of={save} />
      </form>
    </Part>
  );
}
