import "server-only";
import { propose } from "../approvals/propose";
import type { ApprovalView } from "../approvals/schema";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { ruleBroken } from "../errors";
import { writeOnce } from "../write-once";
import { findRemovals } from "./find-removals";
import { readScorerInUse } from "./held-scorer";
import type { RemovalInput } from "./influence-schema";
import { checkedSubject } from "./removal-subject";
import { spanOf } from "./remove-labels";

/**
 * Puts the removal of one person's labels before a second person; nothing changes until they approve. The person
 * concerned may neither propose nor approve. @throws KnownError not_found, forbidden, rule_broken, conflict
 */
export async function proposeRemoval(ctx: Context, input: RemovalInput): Promise<ApprovalView> {
  demandPerson(ctx, "scorer.manage");
  const { subject } = await checkedSubject(ctx.db, input);
  return writeOnce(ctx, async (tx) => {
    const { logSeq } = await readScorerInUse(tx);
    const removals = await findRemovals(tx, spanOf(subject), logSeq);
    if (removals.length === 0)
      throw ruleBroken("No label of this person in that time is in force", "personId");
    return propose(ctx, tx, { kind: "labels.remove", subject, reason: input.reason });
  });
}
