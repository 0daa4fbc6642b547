import "server-only";
import { eq, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { ownSignals } from "@/db/schema/learning";
import { signalSets } from "@/db/schema/transactions";
import type { Context } from "../context";
import { conflict, ruleBroken } from "../errors";
import { adoptSet, foldForSet } from "../learning/adopt-set";
import { appendTrail } from "../trail/append";
import { lockOwnSignals, type OwnRow, ownOrThrow, placed } from "./own-rows";
import { MOST_OWN_SIGNALS } from "./own-schema";
import { newestSetVersion } from "./read-signal-set";
import { catalogueDefinition, type SetDefinition, signalSetOf } from "./signal-set";

/**
 * Switches an own signal on or off, in the transaction of its approval: a further signal set, and a scorer in use that
 * has learned the whole log with it, so that it counts as if it had always been there, or never. The log is re-run
 * before the scorer is locked, and decisions go on meanwhile.
 * @throws KnownError not_found, conflict
 */
export async function switchOwnSignal(
  ctx: Context,
  tx: Tx,
  { signalId }: { signalId: string },
  to: "on" | "off",
): Promise<void> {
  const rows = await lockOwnSignals(tx);
  const row = ownOrThrow(rows, signalId);
  if ((row.state === "on") === (to === "on")) throw conflict(`This signal is ${to} already`);
  const position = row.position ?? nextPosition(rows);
  const definition = catalogueDefinition(
    placed(rows.map((one) => (one.id === signalId ? { ...one, state: to, position } : one))),
  );
  const set = signalSetOf((await newestSetVersion(tx)) + 1, definition);
  const ahead = await foldForSet(tx, set);
  const now = ctx.now();
  await storeSet(tx, set.version, definition, now);
  const adopted = await adoptSet(tx, now, set, ahead);
  await tx
    .update(ownSignals)
    .set({ state: to, position, revision: sql`${ownSignals.revision} + 1`, changedAt: now })
    .where(eq(ownSignals.id, signalId));
  await appendTrail(ctx, tx, {
    act: to === "on" ? "signal.switched_on" : "signal.switched_off",
    subjectKind: "signal",
    subjectId: signalId,
    facts: {
      key: row.key,
      formula: row.formula,
      middle: row.middle,
      reach: row.reach,
      position,
      signalSetVersion: set.version,
      ...adopted,
    },
  });
}

function nextPosition(rows: readonly OwnRow[]): number {
  const next = rows.reduce((most, { position }) => Math.max(most, position ?? -1), -1) + 1;
  if (next >= MOST_OWN_SIGNALS)
    throw ruleBroken(`No more than ${MOST_OWN_SIGNALS} signals of your own can ever be switched on`);
  return next;
}

async function storeSet(tx: Tx, version: number, definition: SetDefinition, now: Date): Promise<void> {
  await tx.insert(signalSets).values({ version, definition, createdAt: now });
}
