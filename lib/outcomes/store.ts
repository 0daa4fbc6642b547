import "server-only";
import { inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { outcomes } from "@/db/schema/outcomes";
import type { FieldError } from "../errors";
import { newId } from "../new-id";
import { applyOutcomes, lockPayments, type OutcomeToApply } from "./apply";
import { findNamedPayments } from "./find-payments";
import { MoneyBackReader } from "./money-back";
import type { ReadOutcome } from "./read-item";
import type { OutcomeResult } from "./schema";

type SoundOutcome = Extract<ReadOutcome, { outcome: unknown }>;

/**
 * Stores outcomes that have not come in before and applies those whose payment is known.
 * @throws the database's error on a duplicate key where another sender of the same outcome was faster
 */
export async function storeOutcomes(
  tx: Tx,
  read: readonly ReadOutcome[],
  source: string,
  now: Date,
): Promise<{ results: OutcomeResult[]; labels: number }> {
  const sound = read.flatMap((item) => ("outcome" in item ? [item] : []));
  const all = sound.map(({ outcome }) => outcome);
  const named = await findNamedPayments(
    tx,
    source,
    all.map(({ externalId }) => externalId),
  );
  const ids = all.flatMap(({ externalId }) => named(externalId)?.transactionId ?? []);
  const locked = await lockPayments(tx, ids);
  const moneyBack = await MoneyBackReader.on(tx, all, locked.payments);
  const known = await findKnown(tx, sound);
  const toApply: OutcomeToApply[] = [];

  async function storeOne({ outcome, contentHash }: SoundOutcome): Promise<OutcomeResult> {
    const { externalId } = outcome;
    const before = known.get(contentHash.toString("hex"));
    if (before) return { ...before, externalId, status: "duplicate", errors: [] };
    const name = named(externalId);
    if (name?.isAmbiguous) {
      return rejected(externalId, [{ path: "externalId", message: "names payments of several sources" }]);
    }
    const payment = name && locked.payments.get(name.transactionId);
    const money = payment ? moneyBack.read(outcome, payment) : { recoversBaseMinor: null };
    if ("path" in money) return rejected(externalId, [money]);
    const outcomeId = newId();
    const transactionId = payment?.id ?? null;
    const row = { ...outcome, ...money, id: outcomeId, source, transactionId, receivedAt: now, contentHash };
    await tx.insert(outcomes).values(row);
    if (transactionId) toApply.push({ ...outcome, outcomeId, transactionId });
    const stored = { outcomeId, transactionId, applied: transactionId !== null };
    known.set(contentHash.toString("hex"), stored);
    return { ...stored, externalId, status: "created", errors: [] };
  }

  const results: OutcomeResult[] = [];
  for (const item of read) {
    results.push("outcome" in item ? await storeOne(item) : rejected(item.externalId, item.errors));
  }
  return { results, labels: await applyOutcomes(tx, now, toApply, locked) };
}

type Known = Pick<OutcomeResult, "outcomeId" | "transactionId" | "applied">;

async function findKnown(tx: Tx, items: readonly SoundOutcome[]): Promise<Map<string, Known>> {
  if (items.length === 0) return new Map();
  const hashes = items.map(({ contentHash }) => contentHash);
  const rows = await tx
    .select({
      outcomeId: outcomes.id,
      transactionId: outcomes.transactionId,
      appliedAt: outcomes.appliedAt,
      contentHash: outcomes.contentHash,
    })
    .from(outcomes)
    .where(inArray(outcomes.contentHash, hashes));
  return new Map(
    rows.map(({ contentHash, appliedAt, ...row }) => [
      contentHash.toString("hex"),
      { ...row, applied: appliedAt !== null },
    ]),
  );
}

function rejected(externalId: string | null, errors: readonly FieldError[]): OutcomeResult {
  return {
    externalId,
    status: "rejected",
    outcomeId: null,
    transactionId: null,
    applied: false,
    errors: [...errors],
  };
}
