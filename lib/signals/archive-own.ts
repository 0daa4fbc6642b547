import "server-only";
import { eq, sql } from "drizzle-orm";
import { ownSignals } from "@/db/schema/learning";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockOwnSignals, ownOrThrow, refuseWhileProposed } from "./own-rows";
import type { ArchiveSignalInput } from "./own-schema";

/** Puts a draft, or a signal that is off, away for good. Past scores still name it. */
export async function archiveSignal(ctx: Context, { id, revision }: ArchiveSignalInput): Promise<null> {
  demandPerson(ctx, "scorer.manage");
  await writeOnce(ctx, async (tx) => {
    const row = ownOrThrow(await lockOwnSignals(tx), id, revision);
    if (row.state === "on") throw conflict("This signal is on; propose to switch it off first");
    await refuseWhileProposed(tx, id);
    await tx
      .update(ownSignals)
      .set({ isArchived: 1, revision: sql`${ownSignals.revision} + 1`, changedAt: ctx.now() })
      .where(eq(ownSignals.id, id));
    await appendTrail(ctx, tx, {
      act: "signal.archived",
      subjectKind: "signal",
      subjectId: id,
      facts: { key: row.key },
    });
    return null;
  });
  return null;
}
