import "server-only";
import { eq } from "drizzle-orm";
import { scorerSnapshots, scorers } from "@/db/schema/scorers";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockCandidate } from "./candidate";
import { lockScorerInUse } from "./held-scorer";
import type { DropInput } from "./learning-schema";

/** Ends a candidate. What it would have lost stays on record; its snapshots, which only a re-run needs, go. */
export async function dropCandidate(ctx: Context, input: DropInput): Promise<null> {
  demandPerson(ctx, "scorer.manage");
  return writeOnce(ctx, async (tx) => {
    await lockScorerInUse(tx);
    const candidate = await lockCandidate(tx, input.id);
    if (!candidate) throw conflict("No candidate of this id runs any more");
    await tx.update(scorers).set({ role: "dropped", changedAt: ctx.now() }).where(eq(scorers.id, input.id));
    await tx.delete(scorerSnapshots).where(eq(scorerSnapshots.scorerId, input.id));
    await appendTrail(ctx, tx, {
      act: "scorer.dropped",
      subjectKind: "scorer",
      subjectId: input.id,
      facts: { labels: candidate.scorer.labels, logSeq: candidate.logSeq },
    });
    return null;
  });
}
