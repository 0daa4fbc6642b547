import "server-only";
import { and, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { idempotencyKeys } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import type { Actor, Context } from "./context";
import { KnownError } from "./errors";

/** Thrown out of a use case when the request has been answered before; the door sends that answer again. */
export class ReplayedAnswer extends Error {
  readonly answer: unknown;
  constructor(answer: unknown) {
    super("This request has been answered before");
    this.answer = answer;
  }
}

type Options = {
  /** False when the use case adds figures after the commit with `completeAnswer`. */
  complete?: boolean;
};

const COMPLETION_WAIT_MS = 2_000;
const COMPLETION_POLL_MS = 10;

/**
 * The transaction of a write use case. With an Idempotency-Key the key row is its first statement: a copy of the
 * request that runs at the same time waits on that row and then gets the first one's answer.
 * @throws ReplayedAnswer, KnownError invalid when the key came with another body
 */
export async function writeOnce<T>(
  ctx: Context,
  work: (tx: Tx) => Promise<T>,
  options: Options = {},
): Promise<T> {
  const idempotency = ctx.idempotency;
  if (!idempotency) return inTransaction(ctx.db, work);
  const actor = actorKey(ctx.actor);
  const mine = and(eq(idempotencyKeys.actor, actor), eq(idempotencyKeys.key, idempotency.key));
  try {
    return await inTransaction(ctx.db, async (tx) => {
      await claimKey(tx, { actor, ...idempotency, createdAt: ctx.now() });
      const answer = await work(tx);
      await tx
        .update(idempotencyKeys)
        .set({ answer: answer ?? null, complete: options.complete === false ? 0 : 1 })
        .where(mine);
      return answer;
    });
  } catch (error) {
    if (!(error instanceof KeyTaken)) throw error;
    throw await replay(ctx, mine, idempotency.requestHash);
  }
}

/** Stores the answer with the figures that were worked out after the commit. */
export async function completeAnswer(ctx: Context, answer: unknown): Promise<void> {
  if (!ctx.idempotency) return;
  await ctx.db
    .update(idempotencyKeys)
    .set({ answer, complete: 1 })
    .where(and(eq(idempotencyKeys.actor, actorKey(ctx.actor)), eq(idempotencyKeys.key, ctx.idempotency.key)));
}

class KeyTaken extends Error {}

async function claimKey(
  tx: Tx,
  row: { actor: string; key: string; requestHash: Buffer; createdAt: Date },
): Promise<void> {
  try {
    await tx.insert(idempotencyKeys).values(row);
  } catch (error) {
    if (isDuplicate(error)) throw new KeyTaken();
    throw error;
  }
}

async function replay(ctx: Context, mine: ReturnType<typeof and>, requestHash: Buffer): Promise<Error> {
  const until = Date.now() + COMPLETION_WAIT_MS;
  for (;;) {
    const [row] = await ctx.db.select().from(idempotencyKeys).where(mine);
    if (!row)
      return new KnownError("conflict", "The first copy of this request did not finish; send it again");
    if (!row.requestHash.equals(requestHash)) {
      const message = "This key was used with another request";
      return new KnownError("invalid", message, { errors: [{ path: "Idempotency-Key", message }] });
    }
    // A server that stopped between commit and completion leaves the answer as the transaction wrote it.
    if (row.complete || Date.now() > until) return new ReplayedAnswer(row.answer);
    await new Promise((resolve) => setTimeout(resolve, COMPLETION_POLL_MS));
  }
}

function actorKey(actor: Actor): string {
  if (actor.kind === "person") return actor.key ? `key:${actor.key.id}` : `person:${actor.personId}`;
  if (actor.kind === "anonymous") return actor.kind;
  return actor.kind === "key" ? `key:${actor.id}` : `system:${actor.job}`;
}
