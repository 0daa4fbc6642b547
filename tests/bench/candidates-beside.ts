import { eq } from "drizzle-orm";
import { createDatabase, type Database } from "@/db/client";
import { Chance } from "@/db/demo/random";
import { people } from "@/db/schema/people";
import { scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import type { PersonActor } from "@/lib/context";
import { environment } from "@/lib/env";
import { readLearning } from "@/lib/learning/compare";
import { createCandidate } from "@/lib/learning/create-candidate";
import { fitHindsight } from "@/lib/learning/fit-hindsight";
import { lockScorerInUse, saveScorer } from "@/lib/learning/held-scorer";
import { learnLabel } from "@/lib/learning/learn";
import { CandidateInput } from "@/lib/learning/learning-schema";
import { followLog } from "@/lib/learning/shadow";
import { newId } from "@/lib/new-id";
import { DIMENSION } from "@/lib/signals/catalogue";
import type { Row } from "../support/bench";
import { contextOf } from "../support/people";
import { ms } from "./support/figures";
import { ensureInstalled } from "./support/install";
import { measured } from "./support/measured";
import { insertPayment } from "./support/payment";

const LABELS = 10_000;
const LABELS_IN_ACT = 500;
const LONGEST_HOLD_MS = 20;
const IDLE_MS = 10_000;
const CANDIDATES = [
  { name: "Six rules", method: "aggregate" },
  { name: "Implicit", method: "implicit" },
  { name: "Newton", method: "newton" },
] as const;

/** Candidates that live a long log, hindsight over all of it and the comparison: how long each holds others up. */
export async function run(): Promise<Row[]> {
  const { db, close } = createDatabase(environment().DATABASE_URL, 6);
  try {
    await ensureInstalled(db);
    await learnMany(db);
    const supervisor = await enter(db);
    for (const candidate of CANDIDATES)
      await createCandidate(contextOf(db, supervisor), CandidateInput.parse(candidate));
    const system = contextOf(db, { kind: "system", job: "bench" });
    const { signal } = new AbortController();
    const idle = await measured(() => new Promise((resolve) => setTimeout(resolve, IDLE_MS)));
    const followed = await measured(() => followLog(system, signal));
    const fitted = await measured(() => fitHindsight(system, signal));
    const compared = await measured(() => readLearning(contextOf(db, supervisor), {}));
    const behind = await db.select().from(scorers).where(eq(scorers.role, "candidate"));
    return [
      {
        name: `${CANDIDATES.length} candidates live ${LABELS} labels, at rest two thirds of the time`,
        measured: ms(followed.ms),
        limit: "–",
        ok: behind.every(({ logSeq }) => logSeq === LABELS),
      },
      {
        name: "the best weights in hindsight, for nine lengths of log",
        measured: ms(fitted.ms),
        limit: "–",
        ok: true,
      },
      { name: "the comparison of all four", measured: ms(compared.ms), limit: "–", ok: true },
      {
        name: "an idle process on this machine, for comparison",
        measured: ms(idle.longestHoldMs),
        limit: "–",
        ok: true,
      },
      ...Object.entries({ followed, fitted, compared }).map(([name, { longestHoldMs }]) => ({
        name: `longest time others were held up (${name})`,
        measured: ms(longestHoldMs),
        limit: ms(LONGEST_HOLD_MS),
        ok: longestHoldMs <= LONGEST_HOLD_MS,
      })),
    ];
  } finally {
    await close();
  }
}

/** Labels of one payment over and over: what is measured does not look at the payment. */
async function learnMany(db: Database): Promise<void> {
  const chance = new Chance(5);
  const transactionId = await insertPayment(db);
  const now = new Date();
  const source = { transactionId, caseId: null, decisionId: null, outcomeId: null, personId: null };
  for (let done = 0; done < LABELS; done += LABELS_IN_ACT) {
    await inTransaction(db, async (tx) => {
      const held = await lockScorerInUse(tx);
      for (let k = 0; k < LABELS_IN_ACT; k++) {
        const vector = randomVector(chance);
        const evidence = vector.slice(0, 8).reduce((sum, x) => sum + 2 * x, -1);
        const label = chance.hits(1 / (1 + Math.exp(-evidence))) ? 1 : -1;
        await learnLabel(tx, held, now, { kind: "outcome", ...source }, vector, label);
      }
      await saveScorer(tx, held, now);
    });
  }
}

function randomVector(chance: Chance): Float64Array {
  const vector = Float64Array.from({ length: DIMENSION }, () =>
    chance.hits(0.4) ? 2 * chance.unit() - 1 : 0,
  );
  vector[DIMENSION - 1] = 1;
  return vector;
}

async function enter(db: Database): Promise<PersonActor> {
  const personId = newId();
  await db.insert(people).values({
    id: personId,
    email: `${personId}@bench.example`,
    name: "supervisor",
    passwordHash: "never signs in",
    createdAt: new Date(),
  });
  return { kind: "person", personId, name: "supervisor", roles: ["supervisor"], timeZone: "UTC", key: null };
}
