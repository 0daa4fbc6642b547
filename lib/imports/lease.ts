import "server-only";
import { and, asc, eq, lt, or } from "drizzle-orm";
import type { Database, Tx } from "@/db/client";
import { imports } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { newId } from "../new-id";

const LEASE_MS = 60_000;

export type ClaimedImport = Pick<
  typeof imports.$inferSelect,
  "id" | "source" | "mapping" | "sizeBytes" | "rowsDone" | "attempts"
> & { leaseOwner: string };

/** Another server took the import over because this one seemed to have stopped. */
export class LostLease extends Error {}

/** Claims the oldest import that waits, or whose server has gone quiet; null when there is none. */
export async function claimImport(db: Database, now: Date): Promise<ClaimedImport | null> {
  return inTransaction(db, async (tx) => {
    const [row] = await tx
      .select()
      .from(imports)
      .where(
        or(eq(imports.state, "queued"), and(eq(imports.state, "running"), lt(imports.leaseExpiresAt, now))),
      )
      .orderBy(asc(imports.createdAt))
      .limit(1)
      .for("update", { skipLocked: true });
    if (!row) return null;
    const leaseOwner = newId();
    const attempts = row.attempts + 1;
    await tx
      .update(imports)
      .set({ state: "running", leaseOwner, leaseExpiresAt: leaseEnd(now), attempts })
      .where(eq(imports.id, row.id));
    return { ...row, leaseOwner, attempts };
  });
}

/** Renews the lease inside the batch's transaction, so that two servers can never both commit a batch. @throws LostLease */
export async function holdLease(tx: Tx, { id, leaseOwner }: ClaimedImport, now: Date): Promise<void> {
  const [row] = await tx
    .select({ leaseOwner: imports.leaseOwner })
    .from(imports)
    .where(eq(imports.id, id))
    .for("update");
  if (row?.leaseOwner !== leaseOwner) throw new LostLease();
  await tx
    .update(imports)
    .set({ leaseExpiresAt: leaseEnd(now) })
    .where(eq(imports.id, id));
}

/** For a server that stops: the next one to look goes on at once. */
export async function giveBack(db: Database, { id, leaseOwner }: ClaimedImport): Promise<void> {
  await db
    .update(imports)
    .set({ state: "queued", leaseOwner: null, leaseExpiresAt: null })
    .where(and(eq(imports.id, id), eq(imports.leaseOwner, leaseOwner)));
}

const leaseEnd = (now: Date) => new Date(now.getTime() + LEASE_MS);
