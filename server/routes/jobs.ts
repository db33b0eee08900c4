import type { Bind } from '../middleware/endpoint.ts';
import * as jobs from '../services/jobs.ts';

export function jobRoutes(bind: Bind, context: jobs.AskingContext): void {
  bind('askQuestion', ({ standing, body }) => jobs.askQuestion(context, standing, body));
  bind('listJobs', ({ standing, query }) => jobs.jobsOf(context, standing, query));
  bind('getJob', ({ standing, params }) => jobs.readJob(context, standing, params.job));
  bind('cancelJob', ({ standing, params }) => jobs.cancelJob(context, standing, params.job));
  bind('getAnswers', ({ query }) => jobs.answersTo(context, query.questions));
}
