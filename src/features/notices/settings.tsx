import { useQuery, useQueryClient } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import type { NoticeSettings } from '../../../shared/contracts/notices.ts';
import { type MailMode, mailModes } from '../../../shared/contracts/people.ts';
import { noticeSettingsQuery } from '../../api/account-queries.ts';
import { call } from '../../api/client.ts';
import { Attempt, useAttempt } from '../../components/attempt.tsx';
import { Failed, Waiting } from '../../components/faces.tsx';
import { Choice, Part } from '../../components/parts.tsx';

export const mailWords: Readonly<Record<MailMode, string>> = {
  immediate: 'at once',
  daily: 'once a day, together',
  off: 'not at all',
};
const modes = mailModes.map((mode) => [mode, mailWords[mode]] as const);
const orAsAll = [['as-all', 'as all others'], ...modes] as const;

/** How notices come by mail: for all notebooks, and for those set apart. */
export function MailSettings({ link }: { link: (notebook: string, title: string) => ReactNode }) {
  const asked = useQuery(noticeSettingsQuery());
  return (
    <Part title="By mail" id="mail">
      {asked.isPending && <Waiting what="Fetching how mail comes to you …" />}
      {asked.isError && (
        <Failed what="The settings could not be fetched." error={asked.error} retry={() => void asked.refetch()} />
      )}
      {asked.data && <Modes settings={asked.data} link={link} />}
    </Part>
  );
}

function Modes({ settings, link }: { settings: NoticeSettings; link: (id: string, title: string) => ReactNode }) {
  const client = useQueryClient();
  const keep = (said: NoticeSettings) => client.setQueryData(noticeSettingsQuery().queryKey, said);
  const set = async (mail: MailMode) => void keep(await call('setNoticeMail', { body: { mail } }));
  return (
    <>
      <Mode label="Notices come by mail" mail={settings.mail} set={set} />
      {settings.notebooks.length > 0 && (
        <ul className="mt-3 space-y-1">
          {settings.notebooks.map((one) => (
            <li key={one.notebook} className="colophon-line">
              <span>{link(one.notebook, one.title)}</span>
              <NotebookMail notebook={one.notebook} mail={one.mail} label={`Mail about ${one.title}`} />
            </li>
          ))}
        </ul>
      )}
      <p className="label mt-3">For one notebook alone, choose it in its colophon under “people and rights”.</p>
    </>
  );
}

function Mode(props: { label: string; mail: MailMode; set: (mail: MailMode) => Promise<void> }) {
  const change = useAttempt(props.set);
  return (
    <p className="colophon-line">
      <Choice label={props.label} value={props.mail} options={modes} choose={change.run} />
      <Attempt of={change} />
    </p>
  );
}

/** How notices about one notebook come by mail. */
function NotebookMail({ notebook, mail, label }: { notebook: string; mail: MailMode | null; label: string }) {
  const client = useQueryClient();
  const change = useAttempt(async (wanted: MailMode | 'as-all') => {
    const body = { mail: wanted === 'as-all' ? null : wanted };
    const said = await call('followNotebook', { params: { notebook }, body });
    client.setQueryData(noticeSettingsQuery().queryKey, said);
  });
  return (
    <>
      <Choice label={label} quiet value={mail ?? 'as-all'} options={orAsAll} choose={change.run} />
      <Attempt of={change} />
    </>
  );
}
