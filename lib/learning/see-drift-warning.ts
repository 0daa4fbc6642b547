import "server-only";
import { and, eq, isNull } from "drizzle-orm";
import { driftWarnings } from "@/db/schema/learning";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict, notFound } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { fitBaseline } from "./drift-baseline";
import { DriftDetail, type DriftSeenInput } from "./drift-schema";
import { readDriftStream } from "./drift-stream";

/**
 * Says that a warning has been seen. What labels stand to the scores by now is taken as known; from the next label on,
 * the same statistic warns of what departs from it.
 */
export async function seeDriftWarning(ctx: Context, { id }: DriftSeenInput): Promise<null> {
  const person = demandPerson(ctx, "scorer.manage");
  const stream = await readDriftStream(ctx.db);
  return writeOnce(ctx, async (tx) => {
    const [warning] = await tx.select().from(driftWarnings).where(eq(driftWarnings.id, id)).for("update");
    if (!warning) throw notFound("This warning");
    if (warning.seenAt) throw conflict("Somebody has seen this warning already");
    const detail = DriftDetail.parse(warning.detail);
    const labels = stream?.scorerId === warning.scorerId ? stream.labels : [];
    const since = detail.recentLabels + labels.filter(({ seq }) => seq > warning.seq).length;
    const accepted = fitBaseline(labels, since);
    await tx
      .update(driftWarnings)
      .set({ seenBy: person.personId, seenAt: ctx.now(), detail: { ...detail, accepted } })
      .where(and(eq(driftWarnings.id, id), isNull(driftWarnings.seenAt)));
    await appendTrail(ctx, tx, {
      act: "scorer.drift_seen",
      subjectKind: "scorer",
      subjectId: warning.scorerId,
      facts: { warningId: id, kind: warning.kind, ...accepted },
    });
    return null;
  });
}
