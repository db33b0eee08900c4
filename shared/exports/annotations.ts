import type { Person } from '../contracts/people.ts';
import type { Remark, RemarkSubject, Reply } from '../contracts/reviews.ts';

/** Where a notebook is found: the installation's address, without a slash at its end, and the notebook's id. */
export interface Place {
  readonly base: string;
  readonly notebook: string;
}

/**
 * Remarks and replies as an annotation collection in JSON-LD. Sources: Web Annotation Data Model, W3C Recommendation of
 * 23 February 2017, sections 3 (annotations), 4 (selectors) and 5 (collections); Web Annotation Vocabulary of the same day.
 */
export function annotationsOf(
  remarks: readonly Remark[],
  place: Place,
): Record<string, unknown> & { '@context': unknown } {
  const here = `${place.base}/notebooks/${place.notebook}`;
  const items = remarks.flatMap((remark) => [
    annotation(remark, place, {
      motivation: 'commenting',
      target: targetOf(remark, here),
      'gaugewright:state': remark.state,
      ...(remark.settledAt === null ? {} : { 'gaugewright:settled': remark.settledAt }),
    }),
    ...remark.replies.map((reply) => annotation(reply, place, { motivation: 'replying', target: idOf(remark, place) })),
  ]);
  return {
    '@context': ['http://www.w3.org/ns/anno.jsonld', { gaugewright: 'urn:gaugewright:' }],
    id: `${here}/annotations`,
    type: 'AnnotationCollection',
    label: 'Remarks',
    total: items.length,
    first: { id: `${here}/annotations#all`, type: 'AnnotationPage', startIndex: 0, items },
  };
}

const idOf = ({ id }: Reply, { base, notebook }: Place): string => `${base}/notebooks/${notebook}?remark=${id}`;

function annotation(said: Reply, place: Place, more: Record<string, unknown>): Record<string, unknown> {
  return {
    id: idOf(said, place),
    type: 'Annotation',
    created: said.at,
    ...(said.editedAt === null ? {} : { modified: said.editedAt }),
    ...(said.by === null ? {} : { creator: personOf(said.by) }),
    // A remark that was taken back keeps its place without a body.
    ...(said.text === null
      ? {}
      : { body: { type: 'TextualBody', value: said.text, format: 'text/markdown', purpose: 'commenting' } }),
    ...more,
  };
}

const personOf = ({ id, name, handle }: Person): Record<string, unknown> => ({
  id: `urn:uuid:${id}`,
  type: 'Person',
  name,
  nickname: handle,
});

/** The edition where its subject last stood once it is gone from the working text, else what it was made on. */
function targetOf({ subject, stands, edition, madeOn }: Remark, here: string): Record<string, unknown> {
  const number = stands === 'gone' ? edition : madeOn;
  const source = number === null ? here : `${here}/editions/${String(number)}`;
  return { type: 'SpecificResource', source, selector: selectorOf(subject) };
}

function selectorOf(subject: RemarkSubject): Record<string, unknown> {
  const entry = { type: 'FragmentSelector', value: `entry-${subject.entry}` };
  switch (subject.what) {
    case 'entry':
      if (subject.quote === null) return entry;
      return { ...entry, refinedBy: { type: 'TextQuoteSelector', ...subject.quote } };
    case 'term':
      return {
        ...entry,
        'gaugewright:term': { model: subject.model, tex: subject.tex, orbit: subject.orbit, steps: subject.steps },
      };
    case 'claim': {
      const { audit, subject: about, statement } = subject;
      return { ...entry, 'gaugewright:claim': { audit, subject: about, statement } };
    }
  }
}
