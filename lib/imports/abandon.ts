import "server-only";
import { and, eq, lt } from "drizzle-orm";
import type { Database } from "@/db/client";
import { importChunks, imports } from "@/db/schema/transactions";

/** A transfer that has brought nothing for so long belongs to a server or a sender that is gone. */
const SILENCE_MS = 5 * 60_000;

export const uploadLeaseEnd = (now: Date) => new Date(now.getTime() + SILENCE_MS);

/** Marks a transfer that broke off, and drops what came of it. */
export async function abandonUpload(db: Database, id: string, now: Date): Promise<void> {
  await db.transaction(async (tx) => {
    const [changed] = await tx
      .update(imports)
      .set({
        state: "failed",
        problem: "The file did not come in whole",
        finishedAt: now,
        leaseExpiresAt: null,
      })
      .where(and(eq(imports.id, id), eq(imports.state, "receiving")));
    if (changed.affectedRows > 0) await tx.delete(importChunks).where(eq(importChunks.importId, id));
  });
}

/** For transfers whose server ended before it could say so. */
export async function abandonSilentUploads(db: Database, now: Date): Promise<void> {
  const silent = await db
    .select({ id: imports.id })
    .from(imports)
    .where(and(eq(imports.state, "receiving"), lt(imports.leaseExpiresAt, now)));
  for (const { id } of silent) await abandonUpload(db, id, now);
}
