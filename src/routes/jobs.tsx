import { useQuery } from '@tanstack/react-query';
import { Link, Navigate } from 'react-router-dom';
import { meQuery } from '../api/queries.ts';
import { Empty, Failed, Waiting } from '../components/faces.tsx';
import { Jobs } from '../features/jobs/jobs.tsx';
import { jobsQuery } from '../features/jobs/queries.ts';
import { paths } from './paths.ts';
import { Sheet } from './sheet.tsx';

/** The questions that a person handed to the server, with how far each is. */
export function JobsPage() {
  const me = useQuery(meQuery());
  const jobs = useQuery({ ...jobsQuery(), enabled: me.data?.person != null });
  if (me.data && !me.data.person) return <Navigate to={paths.signIn.to(paths.jobs.to())} replace />;
  return (
    <Sheet title="Jobs">
      <h1>Jobs</h1>
      {jobs.isPending && <Waiting what="Fetching your jobs …" />}
      {jobs.isError && (
        <Failed what="Your jobs could not be fetched." error={jobs.error} retry={() => void jobs.refetch()} />
      )}
      {jobs.data?.items.length === 0 && (
        <Empty title="Nothing was handed over">
          <p>
            What a browser answers in some seconds is answered on the page. A larger question stands open in its
            notebook with what it would cost, and can be handed to the server there; its answer appears on the page by
            itself, and at once for everyone who asks the same.
          </p>
        </Empty>
      )}
      {jobs.data && jobs.data.items.length > 0 && (
        <Jobs jobs={jobs.data.items} link={(id, title) => <Link to={paths.notebook.to(id)}>{title}</Link>} />
      )}
    </Sheet>
  );
}
