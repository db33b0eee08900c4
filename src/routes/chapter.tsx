import { Link, useParams } from 'react-router-dom';
import { Prose } from '../components/prose.tsx';
import type { Section } from '../features/guide/chapter.ts';
import { chapters } from '../features/guide/chapters.ts';
import { GuideContents } from '../features/guide/contents.tsx';
import { NotFoundPage } from './not-found.tsx';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** One chapter of the guide. */
export function ChapterPage() {
  const { chapter: name = '' } = useParams();
  const at = chapters.findIndex((one) => one.name === name);
  const chapter = chapters[at];
  if (!chapter) return <NotFoundPage />;
  const next = chapters[at + 1];
  return (
    <Sheet title={chapter.title} narrow>
      <p className="label pt-8">
        <Link to={paths.guide.to()}>Guide</Link>
      </p>
      <h1>{chapter.title}</h1>
      {chapter.sections.map((section) => (
        <SectionShown key={section.heading} section={section} />
      ))}
      <hr className="mt-10" />
      <p className="label mt-4">
        {next && (
          <>
            Next: <Link to={paths.chapter.to(next.name)}>{next.title}</Link>
          </>
        )}
      </p>
      <GuideContents open={name} link={(to, title) => <Link to={paths.chapter.to(to)}>{title}</Link>} />
      <p className="label mt-3">
        <Link to={`${paths.guide.to()}#language`}>The operator language</Link>, word by word
      </p>
    </Sheet>
  );
}

function SectionShown({ section: { heading, prose, example } }: { section: Section }) {
  return (
    <section className="mt-8" aria-label={heading}>
      <h2>{heading}</h2>
      <div className="mt-2">
        <Prose text={prose} />
      </div>
      {example !== undefined && (
        <pre className="code mt-3 overflow-x-auto" tabIndex={0} aria-label={`Example: ${heading}`}>
          {example.trimEnd()}
        </pre>
      )}
    </section>
  );
}
