import "server-only";
import { and, eq, isNull } from "drizzle-orm";
import { driftWarnings } from "@/db/schema/learning";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict, notFound } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import type { DriftSeenInput } from "./drift-schema";

/** Says that a warning has been seen: from the next label on, the same statistic can warn again. */
export async function seeDriftWarning(ctx: Context, { id }: DriftSeenInput): Promise<null> {
  const person = demandPerson(ctx, "scorer.manage");
  return writeOnce(ctx, async (tx) => {
    const [warning] = await tx.select().from(driftWarnings).where(eq(driftWarnings.id, id)).for("update");
    if (!warning) throw notFound("This warning");
    if (warning.seenAt) throw conflict("Somebody has seen this warning already");
    await tx
      .update(driftWarnings)
      .set({ seenBy: person.personId, seenAt: ctx.now() })
      .where(and(eq(driftWarnings.id, id), isNull(driftWarnings.seenAt)));
    await appendTrail(ctx, tx, {
      act: "scorer.drift_seen",
      subjectKind: "scorer",
      subjectId: warning.scorerId,
      facts: { warningId: id, kind: warning.kind },
    });
    return null;
  });
}
