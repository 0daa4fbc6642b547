import { eq } from "drizzle-orm";
import { createDatabase, type Database } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { labelLog, scorers } from "@/db/schema/scorers";
import { environment } from "@/lib/env";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { replayLog } from "@/lib/learning/replay";
import { createScorer, type Label, type Scorer } from "@/lib/scorer";
import { drawLabelled, type Labelled } from "../scorer/fixture";
import type { Row } from "../support/bench";
import { ensureInstalled } from "./support/install";
import { insertPayment } from "./support/payment";

const LABELS = 100_000;
const ROWS_IN_INSERT = 1_000;
/** Most signals of a payment are small or absent; vectors this short stay within the feature bound. */
const SCALE = 0.4;
const LIMIT_S = 3;

/** A log of a hundred thousand labels lived again from the database, as the replay command does, bit for bit. */
export async function run(): Promise<Row[]> {
  const { db, close } = createDatabase(environment().DATABASE_URL, 4);
  try {
    await ensureInstalled(db);
    const { id, scorer } = await readScorerInUse(db);
    const labelled = drawLabelled(LABELS, scorer.dimension, 5, SCALE);
    await writeLog(db, id, createScorer(scorer.options), labelled);
    const alone = seconds(() => learnAll(createScorer(scorer.options), labelled));
    const startedMs = performance.now();
    const report = await replayLog(db);
    const tookS = (performance.now() - startedMs) / 1_000;
    const same =
      report.firstDifferingLoss === null &&
      report.cumulativeLossEqual &&
      report.differingStates.length === 0 &&
      report.labels === LABELS;
    const name = `of ${LABELS} labels, d = ${scorer.dimension}`;
    return [
      {
        name: `the scorer's part of a replay ${name}`,
        measured: `${alone.toFixed(2)} s`,
        limit: `at most ${LIMIT_S} s`,
        ok: alone <= LIMIT_S,
      },
      {
        name: `replay from the database ${name}`,
        measured: `${tookS.toFixed(2)} s`,
        limit: "no limit set; reads every row",
        ok: true,
      },
      {
        name: "losses and state",
        measured: same ? "identical" : "DIFFER",
        limit: "bit for bit",
        ok: same,
      },
    ];
  } finally {
    await close();
  }
}

function learnAll(scorer: Scorer, { vectors, labels }: Labelled): void {
  vectors.forEach((x, n) => {
    scorer.learn(x, labels[n] as Label);
  });
}

/** The rows that learning these labels one by one would have left, all on one payment. */
async function writeLog(
  db: Database,
  scorerId: string,
  scorer: Scorer,
  { vectors, labels }: Labelled,
): Promise<void> {
  const transactionId = await insertPayment(db);
  const { signalSetVersion } = await readScorerInUse(db);
  let cumulativeLoss = 0;
  for (let from = 0; from < vectors.length; from += ROWS_IN_INSERT) {
    const rows = vectors.slice(from, from + ROWS_IN_INSERT).map((vector, i) => {
      const label = labels[from + i] as Label;
      const { loss } = scorer.learn(vector, label);
      cumulativeLoss += loss;
      const seq = from + i + 1;
      return {
        seq,
        kind: "decision" as const,
        transactionId,
        label,
        weight: 1,
        vector: vectorToBytes(vector),
        signalSetVersion,
        loss,
        scorerVersion: seq + 1,
        at: new Date(),
      };
    });
    await db.insert(labelLog).values(rows);
  }
  const state = Buffer.from(scorer.snapshot());
  await db
    .update(scorers)
    .set({ state, cumulativeLoss, logSeq: vectors.length, version: vectors.length + 1 })
    .where(eq(scorers.id, scorerId));
}

function seconds(work: () => void): number {
  const startedMs = performance.now();
  work();
  return (performance.now() - startedMs) / 1_000;
}
