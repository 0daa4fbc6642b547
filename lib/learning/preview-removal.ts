import "server-only";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { findRemovals } from "./find-removals";
import { readScorerInUse } from "./held-scorer";
import type { RemovalPreview, RemovalPreviewInput } from "./influence-schema";
import { readPaymentsLookedAt } from "./payments-looked-at";
import { checkedSubject } from "./removal-subject";
import { spanOf } from "./remove-labels";
import { effectOfRemoving } from "./without-labels";

/** What a removal would do if it were carried out now, folded in full. @throws KnownError not_found, invalid */
export async function previewRemoval(ctx: Context, input: RemovalPreviewInput): Promise<RemovalPreview> {
  demand(ctx, "approvals.settle");
  const { person, subject } = await checkedSubject(ctx.db, input);
  const held = await readScorerInUse(ctx.db);
  const removals = await findRemovals(ctx.db, spanOf(subject), held.logSeq);
  const payments = await readPaymentsLookedAt(ctx.db, held.signals);
  return {
    person,
    from: subject.from,
    to: subject.to,
    labels: removals.length,
    givenBack: removals.filter(({ label }) => label !== 0).length,
    logSeq: held.logSeq,
    payments: { of: payments.of, count: payments.count },
    effect: await effectOfRemoving(ctx.db, held, removals, payments),
  };
}
