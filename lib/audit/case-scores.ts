import "server-only";
import { eq } from "drizzle-orm";
import { cases, decisions } from "@/db/schema/cases";
import { mayDo } from "../auth/demand";
import { UNDECIDED_STATES } from "../cases/codes";
import { maySee, readerOf } from "../cases/visibility";
import type { Context } from "../context";
import { forbidden, notFound } from "../errors";
import { policyInForce } from "../policy/read";

export type CaseScores = {
  transactionId: string;
  /** The policy hides scores until the verdict, and there is none. */
  hidden: boolean;
  /** May look into the record: who reads everybody's, and who decided this case. */
  mayDerive: boolean;
};

/** The case whose scores are asked for, as far as the asker may see it. @throws KnownError not_found, forbidden */
export async function caseScoresOrThrow(ctx: Context, caseId: string): Promise<CaseScores> {
  const [row] = await ctx.db
    .select({
      transactionId: cases.transactionId,
      state: cases.state,
      assignedTo: cases.assignedTo,
      claimedBy: cases.claimedBy,
      escalatedAt: cases.escalatedAt,
    })
    .from(cases)
    .where(eq(cases.id, caseId));
  if (!row) throw notFound("The case");
  const reader = readerOf(ctx.actor);
  const deciders = await ctx.db
    .select({ personId: decisions.personId })
    .from(decisions)
    .where(eq(decisions.caseId, caseId));
  const decidedIt = deciders.some(({ personId }) => personId === reader.personId);
  if (!maySee(row, reader) && !decidedIt) throw forbidden("This case is not yours");
  const isUndecided = UNDECIDED_STATES.some((state) => state === row.state);
  const hides = isUndecided && (await policyInForce(ctx.db, ctx.now())).terms.hideScoreUntilVerdict;
  return {
    transactionId: row.transactionId,
    hidden: hides,
    mayDerive:
      ctx.actor.kind === "person" &&
      (mayDo(ctx.actor, "trail.read") || (decidedIt && mayDo(ctx.actor, "trail.own"))),
  };
}
