import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { call } from '../../api/client.ts';
import { reread } from '../../api/review-queries.ts';
import { Choice } from '../../components/parts.tsx';
import type { Slice } from '../../reading/slices.ts';
import { subjectsOf } from './anchors.ts';
import { Write } from './write.tsx';

interface Props {
  readonly notebook: string;
  readonly edition: number | undefined;
  readonly entry: string;
  readonly slice: Slice | undefined;
  /** Words that were chosen in the entry when the remark was begun. */
  readonly quote: string;
  readonly done: () => void;
}

/** A new remark: what it speaks of in its entry, and what it says. */
export function NewRemark({ notebook, edition, entry, slice, quote, done }: Props) {
  const client = useQueryClient();
  const [key, setKey] = useState('entry');
  const subjects = subjectsOf(entry, slice, quote);
  const subject = subjects.find((one) => one.key === key) ?? subjects[0];
  if (!subject) return null;
  return (
    <div className="remark">
      <Choice
        label="on"
        value={subject.key}
        options={subjects.map((one) => [one.key, one.words] as const)}
        choose={setKey}
      />
      <Write
        notebook={notebook}
        label="Your remark"
        words="put it in the margin"
        send={async (text) => {
          const body = { subject: subject.subject, text, ...(edition === undefined ? {} : { edition }) };
          await call('makeRemark', { params: { notebook }, body });
          await reread(client, notebook, 'remarks');
          done();
        }}
        leave={done}
      />
    </div>
  );
}

/** The words chosen on the page, where they lie within this entry; else none. */
export function chosenIn(entry: string): string {
  const selection = document.getSelection();
  const node = selection?.anchorNode;
  const within = node instanceof Element ? node : node?.parentElement;
  const words = selection?.toString().trim() ?? '';
  if (words === '' || words.length > 1000) return '';
  return within?.closest('[data-entry]')?.getAttribute('data-entry') === entry ? words : '';
}
