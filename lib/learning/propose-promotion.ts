import "server-only";
import { and, eq } from "drizzle-orm";
import { scorers } from "@/db/schema/scorers";
import { propose } from "../approvals/propose";
import type { ApprovalView } from "../approvals/schema";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict } from "../errors";
import { writeOnce } from "../write-once";
import type { PromotionInput } from "./learning-schema";

/** Puts a candidate's promotion before a second person; nothing changes until they approve. */
export async function proposePromotion(ctx: Context, input: PromotionInput): Promise<ApprovalView> {
  demandPerson(ctx, "scorer.manage");
  return writeOnce(ctx, async (tx) => {
    const [candidate] = await tx
      .select({ id: scorers.id })
      .from(scorers)
      .where(and(eq(scorers.id, input.id), eq(scorers.role, "candidate")));
    if (!candidate) throw conflict("No candidate of this id runs any more");
    return propose(ctx, tx, {
      kind: "scorer.promote",
      subject: { scorerId: candidate.id },
      reason: input.reason,
    });
  });
}
