import { listAnswersOfPart } from "#app/data/approvals.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { listPartsOfJob } from "#app/data/parts.server.ts";
import { listPayments } from "#app/data/payments.server.ts";
import { listFitPhotos, listRevisionPhotos } from "#app/data/photos.server.ts";
import { listRevisions } from "#app/data/revisions.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import { formatMoney } from "#app/domain/money.ts";
import { changesSince, standingApproval } from "./approvals.server.ts";
import { definingModel } from "./makeability.server.ts";

/** Everything the customer's calm page says, and nothing of the shop's inside. */
export async function loadCustomerPage(tx: Tx, jobId: string) {
  const job = orNotFound(await findJob(tx, jobId));
  const shop = orNotFound(await findShop(tx));
  const parts = [];
  for (const part of (await listPartsOfJob(tx, jobId)).filter(({ setAside }) => !setAside)) {
    const revisions = await listRevisions(tx, part.id);
    const shown = revisions.filter(({ sharedAt, setAsideReason }) => sharedAt !== null && setAsideReason === null).at(-1);
    if (!shown) {
      parts.push({ id: part.id, name: part.name, shown: null });
      continue;
    }
    const answers = await listAnswersOfPart(tx, part.id);
    const model = await definingModel(tx, shown.id);
    const before = standingApproval(answers);
    const answered = answers.find(({ revisionId, modelSha256 }) => revisionId === shown.id && modelSha256 === model?.sha256);
    parts.push({
      id: part.id,
      name: part.name,
      shown: {
        revisionId: shown.id,
        ordinal: shown.ordinal,
        reason: shown.reason,
        released: shown.sealedAt !== null,
        model: model ? { fileId: model.id, sha256: model.sha256 } : null,
        photos: [...(await listFitPhotos(tx, shown.id)), ...(await listRevisionPhotos(tx, shown.id))].filter(({ ready }) => ready).map(({ fileId, name, width, height }) => ({ fileId, name, width, height })),
        answer: answered ? { word: answered.answer, at: answered.at, reason: answered.reason } : null,
        changes: before && before.modelSha256 !== model?.sha256 ? await changesSince(tx, shown, before.ordinal) : [],
      },
      tried: revisions.filter(({ sharedAt, id }) => sharedAt !== null && id !== shown.id).map(({ ordinal, reason }) => ({ ordinal, reason })),
    });
  }
  const payments = await listPayments(tx, jobId);
  const money = (minor: number) => formatMoney(minor, shop.currency);
  return {
    job: { id: job.id, title: job.title, promise: job.promise },
    shopName: shop.name,
    parts,
    deposit: job.depositAgreedMinor === null ? null : { agreed: money(job.depositAgreedMinor), paid: money(payments.reduce((sum, { amountMinor }) => sum + amountMinor, 0)) },
  };
}
