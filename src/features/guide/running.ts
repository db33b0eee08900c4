import type { Chapter } from './chapter.ts';

/** For those who run an installation, and for those who write scripts against one. */
export const running: readonly Chapter[] = [
  {
    name: 'stewards',
    title: 'For stewards',
    about: 'run, back up, scale out',
    sections: [
      {
        heading: 'Run it',
        prose: `\`npm start\` opens a private database, builds where sources changed, serves, and runs one worker. It listens on loopback alone until you say otherwise. For an installation that others use, set \`NODE_ENV=production\`, \`PUBLIC_URL\` to the address that people type, \`HOST\` and \`PORT\`, and \`SESSION_SECRET\` to 32 characters or more that stay the same; put a proxy that speaks TLS in front and count it in \`TRUST_PROXY\`.

People sign in through GitHub (\`GITHUB_CLIENT_ID\`, \`GITHUB_CLIENT_SECRET\`) or by a link that is mailed to them (\`SMTP_URL\`, \`MAIL_FROM\`). \`STEWARDS\` names who is a steward from the start. A setting that is wrong is refused at the start, with what it must be.`,
      },
      {
        heading: 'Scale out',
        prose: `Web servers and workers hold nothing of their own: everything is in the PostgreSQL database that \`DATABASE_URL\` names. Start as many as you like with the same \`DATABASE_URL\` and \`SESSION_SECRET\`; \`npm run worker\` adds a worker, here or on another machine. A worker that dies loses its step and no job: another goes on from the last checkpoint.`,
      },
      {
        heading: 'Back up',
        prose: `The database is the only thing to keep, with the session secret if people are to stay signed in. Any tool for PostgreSQL will do, such as \`pg_dump\` on \`DATABASE_URL\`; it may run while people work. The private database of \`npm start\` lies in the folder \`.var\` of the checkout: stop the server, then copy it whole. A restored database is taken to the present form at the next start.`,
      },
      {
        heading: 'Health and limits',
        prose: `\`/healthz\` answers whether the server and its database are well. The page of stewardship shows people, work under way and what failed, and sets the limits: jobs, notebooks and invitations for each person, and whether strangers may sign up. Stewards do not get to read private notebooks.`,
      },
    ],
  },
  {
    name: 'interface',
    title: 'Interface for programs',
    about: 'tokens, addresses, the report',
    sections: [
      {
        heading: 'Access',
        prose: `All that the pages do goes over HTTP with JSON, and a script may do the same. Make a token on the account page, choose what it may do, and send it with each request as \`Authorization: Bearer TOKEN\`. It is shown once.`,
      },
      {
        heading: 'Addresses',
        prose: `\`/api/openapi.json\` describes every request and answer (OpenAPI 3.1). Some to begin with:

- \`GET /api/catalogue\`: the worked dualities; \`GET /api/catalogue/NAME\`: one of them with its text
- \`POST /api/imports\` with \`{ "source": TEXT }\`: a notebook of a source
- \`GET /api/notebooks/ID/source\`: its text
- \`POST /api/notebooks/ID/editions\` with \`{ "summary": WORDS }\`: publish an edition; its claims are computed then

What goes wrong is answered as a problem document (RFC 9457) whose \`code\` is for programs and whose \`detail\` is for people. To change an entry, name the version you started from in \`If-Match\`: who was overtaken gets both texts and loses none.`,
      },
      {
        heading: 'The report',
        prose: `\`npm run --silent report -- FILE.gw --json\` prints what the page is drawn from: problems with line and column, the models term by term, the claims with grade, figures, witness and cautions. It exits with 0, with 1 for problems in the source, and with 2 where it was called wrongly.`,
      },
    ],
  },
];
