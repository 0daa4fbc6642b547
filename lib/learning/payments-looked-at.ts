import "server-only";
import { desc, eq, inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { scores } from "@/db/schema/transactions";
import { UNDECIDED_STATES } from "../cases/codes";
import { padVector, type SignalSet } from "../signals/signal-set";
import type { PaymentsLookedAt } from "./influence-schema";

/** Enough for a mean; each costs two scores for every person. */
const LOOKED_AT = 1_000;

export type Payments = PaymentsLookedAt & { vectors: Float64Array[] };

/** The newest payments that wait, as they are scored now; where none waits, the newest at all. */
export async function readPaymentsLookedAt(db: Executor, signals: SignalSet): Promise<Payments> {
  const waiting = await db
    .select({ vector: scores.vector })
    .from(cases)
    .innerJoin(scores, eq(scores.id, cases.scoreId))
    .where(inArray(cases.state, [...UNDECIDED_STATES]))
    .orderBy(desc(cases.number))
    .limit(LOOKED_AT);
  const rows =
    waiting.length > 0
      ? waiting
      : await db
          .select({ vector: scores.vector })
          .from(scores)
          .where(eq(scores.kind, "arrival"))
          .orderBy(desc(scores.id))
          .limit(LOOKED_AT);
  return {
    of: waiting.length > 0 ? "waiting" : "newest",
    count: rows.length,
    vectors: rows.map(({ vector }) => padVector(signals, bytesToVector(vector))),
  };
}
