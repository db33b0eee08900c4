import type { Request } from 'express';
import type { Asked, Bind } from '../middleware/endpoint.ts';
import { archive, binOf, deleteForGood, restore } from '../services/bin.ts';
import { compare } from '../services/comparing.ts';
import { exportAs, type ExportedFile, type FileContext, jsonSchema, preview } from '../services/files.ts';
import * as remarks from '../services/remarks.ts';
import * as variants from '../services/variants.ts';
import * as verdicts from '../services/verdicts.ts';

/** The rows of reviews and files. `publicUrl`: the address that people know the installation by; null: the one they asked at. */
export function reviewRoutes(bind: Bind, context: FileContext, publicUrl: string | null): void {
  const base = (request: Request): string => publicUrl ?? `${request.protocol}://${request.get('host') ?? 'localhost'}`;

  bind('compare', ({ standing, query }) => compare(context, standing, query));
  bind('getCollation', ({ standing }) => variants.collationOf(context, standing));
  bind('sendVariants', ({ standing, body }) => variants.send(context, standing, body));
  bind('listVariants', ({ standing, query }) => variants.sendings(context, standing, query));
  bind('getVariants', ({ standing, params }) => variants.readSending(context, standing, params.sending));
  bind('withdrawVariants', ({ standing, params }) => variants.withdraw(context, standing, params.sending));
  bind('decideVariant', ({ standing, params, body }) => variants.decide(context, standing, params, body));

  bind('listRemarks', ({ standing, query }) => remarks.remarksOf(context, standing, query));
  bind('makeRemark', ({ standing, body }) => remarks.makeRemark(context, standing, body));
  bind('replyToRemark', ({ standing, params, body }) => remarks.reply(context, standing, params.remark, body.text));
  bind('rewordRemark', ({ standing, params, body }) => remarks.reword(context, standing, params.remark, body.text));
  bind('settleRemark', ({ standing, params, body }) => remarks.settle(context, standing, params.remark, body.state));
  bind('takeRemarkBack', ({ standing, params }) => remarks.takeBack(context, standing, params.remark));
  bind('exportRemarks', ({ standing, request }) => remarks.exportRemarks(context, standing, base(request)));

  bind('listVerdicts', ({ standing, params }) => verdicts.verdictsOf(context, standing, params.edition));
  bind('listAllVerdicts', ({ standing }) => verdicts.verdictsOf(context, standing, null));
  bind('judgeEdition', ({ standing, params, body }) =>
    verdicts.judge(context, standing, { edition: params.edition, claim: null }, body),
  );
  bind('judgeClaim', ({ standing, params, body }) => verdicts.judge(context, standing, params, body));
  bind('takeVerdictBack', ({ standing, params }) =>
    verdicts.takeVerdictBack(context, standing, params.edition, params.verdict),
  );
  bind('rerunClaims', ({ standing, params, body }) => verdicts.rerun(context, standing, params.edition, body));
  bind('listReruns', ({ standing, params }) => verdicts.rerunsOf(context, standing, params.edition));

  bind('archiveNotebook', ({ standing, body }) => archive(context, standing, body.archived));
  bind('listBin', ({ standing }) => binOf(context, standing));
  bind('restoreNotebook', ({ standing, params }) => restore(context, standing, params.binned));
  bind('emptyBin', ({ standing, params }) => deleteForGood(context, standing, params.binned));

  bind('previewImport', ({ body }) => preview(context, body));
  bind('getNotebookSchema', () => Promise.resolve(jsonSchema()));
  bind('exportEditionAs', async ({ standing, params, query, request, response }) =>
    sent(response, await exportAs(context, standing, { ...params, ...query, base: base(request) })),
  );
  bind('exportNotebookAs', async ({ standing, params, query, request, response }) =>
    sent(response, await exportAs(context, standing, { ...params, ...query, edition: undefined, base: base(request) })),
  );
  bind('exportLinkedAs', async ({ standing, params, query, request, response }) =>
    sent(response, await exportAs(context, standing, { ...params, ...query, edition: null, base: base(request) })),
  );
}

/** Names the file for whoever saves it. */
function sent(response: Asked<'exportEditionAs'>['response'], { text, name, media }: ExportedFile): string {
  response.set('Content-Disposition', `attachment; filename="${name}"`).type(`${media}; charset=utf-8`);
  return text;
}
