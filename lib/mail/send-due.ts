import "server-only";
import { and, asc, eq, inArray, lt, lte } from "drizzle-orm";
import type { Database } from "@/db/client";
import { outbox } from "@/db/schema/mail";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { newId } from "../new-id";
import { mayStillRead } from "./may-still-read";
import { type Attempt, afterAttempt, NOT_THEIRS_TO_READ, SENDING_LEASE_MS } from "./rules";
import type { MailSettings } from "./settings";
import { sendBySmtp } from "./smtp";

type OutboxRow = typeof outbox.$inferSelect;

/**
 * Sends what is due, one message after another; any number of servers may do so at once. A message is marked as
 * being sent before the mail server hears of it: a process that dies then leaves a trace, not a second copy.
 * @returns the number of messages tried
 */
export async function sendDueMail(
  ctx: Context,
  settings: MailSettings,
  signal?: AbortSignal,
): Promise<number> {
  await markLostSends(ctx.db, ctx.now());
  const leaseOwner = newId();
  let tried = 0;
  while (!signal?.aborted) {
    const claimed = await claimNext(ctx.db, leaseOwner, ctx.now());
    if (!claimed) break;
    tried += 1;
    const { row, isTheirs } = claimed;
    const attempt = isTheirs ? await sendBySmtp(settings, row) : NOT_THEIRS_TO_READ;
    await recordAttempt(ctx.db, row, attempt, ctx.now());
  }
  return tried;
}

type Claimed = { row: OutboxRow /** Its recipient may still read it. */; isTheirs: boolean };

function claimNext(db: Database, leaseOwner: string, now: Date): Promise<Claimed | null> {
  return inTransaction(db, async (tx) => {
    const [row] = await tx
      .select()
      .from(outbox)
      .where(and(eq(outbox.state, "queued"), lte(outbox.nextAttemptAt, now)))
      .orderBy(asc(outbox.nextAttemptAt))
      .limit(1)
      .for("update", { skipLocked: true });
    if (!row) return null;
    const claim = {
      state: "sending" as const,
      leaseOwner,
      attempts: row.attempts + 1,
      nextAttemptAt: new Date(now.getTime() + SENDING_LEASE_MS),
    };
    await tx.update(outbox).set(claim).where(eq(outbox.id, row.id));
    return { row: { ...row, ...claim }, isTheirs: await mayStillRead(tx, row) };
  });
}

/** The sender's own word also settles a message that was meanwhile taken for lost. */
async function recordAttempt(db: Database, row: OutboxRow, attempt: Attempt, now: Date): Promise<void> {
  await db
    .update(outbox)
    .set({ ...afterAttempt(attempt, row.attempts, now), leaseOwner: null })
    .where(
      and(
        eq(outbox.id, row.id),
        eq(outbox.leaseOwner, row.leaseOwner ?? ""),
        inArray(outbox.state, ["sending", "uncertain"]),
      ),
    );
}

/** A sender that has not reported within its lease has died: whether its message went out nobody knows. */
async function markLostSends(db: Database, now: Date): Promise<void> {
  await db
    .update(outbox)
    .set({
      state: "uncertain",
      problem: "The server stopped while it was sending this message",
    })
    .where(and(eq(outbox.state, "sending"), lt(outbox.nextAttemptAt, now)));
}
