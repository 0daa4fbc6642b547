import { createHash } from "node:crypto";
import { createDatabase, type Database } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { Chance } from "@/db/demo/random";
import { cases } from "@/db/schema/cases";
import { scores, transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { pageOf } from "@/lib/cases/queue-page";
import { RankingModel } from "@/lib/cases/ranking/model";
import type { Context } from "@/lib/context";
import { environment } from "@/lib/env";
import { lockScorerInUse, saveScorer } from "@/lib/learning/held-scorer";
import { ensureScorerInUse } from "@/lib/learning/install";
import { learnLabel } from "@/lib/learning/learn";
import { replaceLabels } from "@/lib/learning/replace";
import { newId } from "@/lib/new-id";
import { ensureFirstPolicy } from "@/lib/policy/install";
import { DIMENSION } from "@/lib/signals/catalogue";
import type { Row } from "../support/bench";
import { ms, quantile } from "./support/figures";
import { measured } from "./support/measured";

const WAITING_CASES = 100_000;
const LABELS = 60;
const LONGEST_HOLD_MS = 20;
const PAGE = 1_000;
const SUPERVISOR = { personId: null, seesAll: true };

/** A hundred thousand waiting cases in one process: how long it takes to keep them ranked, and how long it holds others up. */
export async function run(): Promise<Row[]> {
  const { db, close } = createDatabase(environment().DATABASE_URL);
  try {
    const ctx = systemContext(db);
    await ensureFirstPolicy(ctx);
    await ensureScorerInUse(ctx);
    await insertWaiting(db);
    const model = new RankingModel(db);
    const load = await measured(() => model.read(new Date(), (view) => view.size));
    const chance = new Chance(7);
    const steps: number[] = [];
    const lists: number[] = [];
    const labelled = await measured(async () => {
      for (let index = 0; index < LABELS; index++) {
        await learn(db, randomVector(chance), index % 5 === 0 ? 1 : -1);
        steps.push((await measured(() => model.catchUp())).ms);
        lists.push(
          (await measured(() => model.read(new Date(), (view) => pageOf(view, SUPERVISOR, null, null, 200))))
            .ms,
        );
        await new Promise((resolve) => setTimeout(resolve, 20));
      }
    });
    await undoLast(db);
    const rebuilt = await measured(() => model.catchUp());
    const holds = [load, labelled, rebuilt].map(({ longestHoldMs }) => longestHoldMs);
    const longest = Math.max(...holds);
    return [
      { name: `loading ${WAITING_CASES} cases`, measured: ms(load.ms), limit: "–", ok: true },
      { name: "one label, p95", measured: ms(quantile(steps, 0.95)), limit: "–", ok: true },
      { name: "first page after a label, p95", measured: ms(quantile(lists, 0.95)), limit: "–", ok: true },
      { name: "computing anew after an undo", measured: ms(rebuilt.ms), limit: "–", ok: true },
      {
        name: "longest time others were held up (load, labels, undo)",
        measured: holds.map(ms).join(", "),
        limit: ms(LONGEST_HOLD_MS),
        ok: longest <= LONGEST_HOLD_MS,
      },
    ];
  } finally {
    await close();
  }
}

function systemContext(db: Database): Context {
  return {
    db,
    actor: { kind: "system", job: "bench" },
    now: () => new Date(),
    requestId: newId(),
    idempotency: null,
  };
}

function randomVector(chance: Chance): Float64Array {
  const vector = Float64Array.from({ length: DIMENSION }, () =>
    chance.hits(0.4) ? 2 * chance.unit() - 1 : 0,
  );
  vector[DIMENSION - 1] = 1;
  return vector;
}

async function insertWaiting(db: Database): Promise<void> {
  const chance = new Chance(1);
  const now = new Date(Date.now() - 3_600_000);
  for (let done = 0; done < WAITING_CASES; done += PAGE) {
    const page = Array.from({ length: PAGE }, (_, index) => ({ id: newId(), number: done + index }));
    await db.insert(transactions).values(page.map(({ id, number }) => payment(id, number, now)));
    const inserted = await db
      .insert(scores)
      .values(page.map(({ id }) => arrival(id, randomVector(chance), now)))
      .$returningId();
    await db.insert(cases).values(
      page.map(({ id }, index) => ({
        id: newId(),
        transactionId: id,
        kind: "alert" as const,
        state: "open" as const,
        zone: "review" as const,
        scoreId: inserted[index]?.id as number,
        policyVersion: 1,
        openedAt: now,
        dueAt: new Date(now.getTime() + 86_400_000),
        lapsesAt: new Date(now.getTime() + 14 * 86_400_000),
        changedAt: now,
      })),
    );
  }
}

function payment(id: string, number: number, at: Date) {
  return {
    id,
    source: "bench",
    externalId: `payment-${number}`,
    contentHash: createHash("sha256").update(id).digest(),
    receivedAt: at,
    occurredAt: at,
    amountMinor: 1_000 + (number % 90_000),
    currency: "EUR",
    amountBaseMinor: 1_000 + (number % 90_000),
    direction: "outgoing" as const,
    channel: "card_remote" as const,
    accountId: `account-${number % 20_000}`,
    counterpartyId: `shop-${number % 5_000}`,
    action: "review" as const,
    paymentState: "settled" as const,
  };
}

function arrival(transactionId: string, vector: Float64Array, at: Date) {
  return {
    transactionId,
    kind: "arrival" as const,
    takenAt: at,
    vector: vectorToBytes(vector),
    missing: Buffer.alloc(8),
    signalSetVersion: 1,
    scorerVersion: 1,
    policyVersion: 1,
    logit: 0,
    leverage: 1,
    zone: "review" as const,
  };
}

const source = (transactionId: string) => ({
  transactionId,
  caseId: null,
  decisionId: null,
  outcomeId: null,
  personId: null,
});

let lastLabelled = { transactionId: "", place: 0 };

async function learn(db: Database, vector: Float64Array, label: 1 | -1): Promise<void> {
  const now = new Date();
  const transactionId = newId();
  await db.insert(transactions).values({ ...payment(transactionId, 0, now), externalId: transactionId });
  await inTransaction(db, async (tx) => {
    const held = await lockScorerInUse(tx);
    const { seq } = await learnLabel(
      tx,
      held,
      now,
      { kind: "outcome", ...source(transactionId) },
      vector,
      label,
    );
    lastLabelled = { transactionId, place: seq };
    await saveScorer(tx, held, now);
  });
}

async function undoLast(db: Database): Promise<void> {
  const now = new Date();
  const { transactionId, place } = lastLabelled;
  await inTransaction(db, async (tx) => {
    const held = await lockScorerInUse(tx);
    await replaceLabels(tx, held, now, [{ kind: "undo", ...source(transactionId), place, label: 0 }]);
    await saveScorer(tx, held, now);
  });
}
