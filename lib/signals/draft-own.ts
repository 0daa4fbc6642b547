import "server-only";
import type { Tx } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { ownSignals } from "@/db/schema/learning";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { ruleBroken } from "../errors";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { ownKey } from "./own-key";
import { lockOwnSignals, type OwnRow, refuseBadFormula } from "./own-rows";
import { type DraftSignalInput, MOST_OWN_SIGNALS, type OwnSignalView } from "./own-schema";
import { ownViewOrThrow, roomLeft } from "./read-signals";

/** Defines a signal of the team's own. A draft counts for nothing until two persons switch it on. */
export async function draftSignal(ctx: Context, input: DraftSignalInput): Promise<OwnSignalView> {
  const person = demandPerson(ctx, "scorer.manage");
  refuseBadFormula(input.formula);
  return writeOnce(ctx, async (tx) => {
    const rows = await lockOwnSignals(tx);
    refuseTooMany(rows);
    refuseTakenName(rows, input.name);
    const id = newId();
    const now = ctx.now();
    await insert(tx, rows, { id, ...input, createdBy: person.personId, createdAt: now, changedAt: now });
    await appendTrail(ctx, tx, {
      act: "signal.drafted",
      subjectKind: "signal",
      subjectId: id,
      facts: { formula: input.formula, middle: input.middle, reach: input.reach },
    });
    return ownViewOrThrow(tx, id);
  });
}

type Draft = Omit<typeof ownSignals.$inferInsert, "key" | "state">;

async function insert(tx: Tx, rows: readonly OwnRow[], draft: Draft): Promise<void> {
  const key = ownKey(draft.name, new Set(rows.map((row) => row.key)));
  try {
    await tx.insert(ownSignals).values({ ...draft, key, state: "draft" });
  } catch (error) {
    // Two first drafts at once: there was no row yet to lock.
    if (isDuplicate(error)) throw ruleBroken("Another signal has just been given this name", "name");
    throw error;
  }
}

function refuseTooMany(rows: readonly OwnRow[]): void {
  if (roomLeft(rows) <= 0)
    throw ruleBroken(`There is room for ${MOST_OWN_SIGNALS} signals of your own; archive a draft first`);
}

/** @throws KnownError rule_broken */
export function refuseTakenName(rows: readonly OwnRow[], name: string, except?: string): void {
  const taken = rows.some(
    (row) => row.id !== except && !row.isArchived && row.name.toLowerCase() === name.toLowerCase(),
  );
  if (taken) throw ruleBroken("Another signal has this name", "name");
}
