import "server-only";
import { eq } from "drizzle-orm";
import type { Database, Executor, Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { restoreScorer, type Scorer } from "../scorer";
import { signalSetOfScorer } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";

/** The scorer in use as one reader or one transaction has it; nothing of it is shared in memory. */
export type HeldScorer = {
  id: string;
  name: string;
  /** Grows with every label, undo, correction and change of options. */
  version: number;
  /** Last row of the label log that the state has taken in. */
  logSeq: number;
  signalSetVersion: number;
  /** The signals that it reads. */
  signals: SignalSet;
  /** Sum in nats of the losses as they were lived. */
  cumulativeLoss: number;
  scorer: Scorer;
};

/** @throws Error on an installation without a scorer */
export async function readScorerInUse(db: Executor): Promise<HeldScorer> {
  return orThrow(await findScorerInUse(db));
}

export async function findScorerInUse(db: Executor): Promise<HeldScorer | null> {
  const [row] = await db.select().from(scorers).where(eq(scorers.inUse, 1)).limit(1);
  return row ? toHeld(db, row) : null;
}

export type ScoringScorer = Pick<HeldScorer, "id" | "name" | "version" | "signals" | "scorer">;

// One version of one scorer is one state, so the last one read serves everybody until there is a newer one.
const scoring = new WeakMap<Database, ScoringScorer>();

/**
 * The scorer in use for those who only score with it: whoever learns needs one of their own.
 * @throws Error on an installation without a scorer
 */
export async function readScorerForScoring(db: Database): Promise<ScoringScorer> {
  const [head] = await db
    .select({ id: scorers.id, version: scorers.version })
    .from(scorers)
    .where(eq(scorers.inUse, 1))
    .limit(1);
  const known = scoring.get(db);
  if (head && known?.id === head.id && known.version === head.version) return known;
  const fresh = await readScorerInUse(db);
  scoring.set(db, fresh);
  return fresh;
}

/** Scorers that may come into use one after the other while one waits for the lock. */
const MOST_LOOKS = 5;

/** Locks the scorer in use until the transaction ends. Case rows must be locked before it, the trail's head after. */
export async function lockScorerInUse(tx: Tx): Promise<HeldScorer> {
  for (let look = 1; look <= MOST_LOOKS; look++) {
    const [row] = await tx.select().from(scorers).where(eq(scorers.inUse, 1)).limit(1).for("update");
    if (row) return toHeld(tx, row);
    // Whoever waited while another came into use goes on from the old one's place in the index, and misses a new
    // one that stands before it there. Looking again begins at the front.
  }
  return orThrow(null);
}

/** Writes the advanced state back, once, at the end of the learning steps of a transaction. */
export async function saveScorer(tx: Tx, held: HeldScorer, now: Date): Promise<void> {
  await tx
    .update(scorers)
    .set({
      version: held.version,
      logSeq: held.logSeq,
      state: Buffer.from(held.scorer.snapshot()),
      cumulativeLoss: held.cumulativeLoss,
      changedAt: now,
    })
    .where(eq(scorers.id, held.id));
}

function orThrow(held: HeldScorer | null): HeldScorer {
  if (!held) throw new Error("No scorer is in use; the installation is not set up");
  return held;
}

export async function toHeld(db: Executor, row: typeof scorers.$inferSelect): Promise<HeldScorer> {
  const { id, name, version, logSeq, signalSetVersion, cumulativeLoss, state } = row;
  const signals = await signalSetOfScorer(db, row);
  return {
    id,
    name,
    version,
    logSeq,
    signalSetVersion,
    signals,
    cumulativeLoss,
    scorer: restoreScorer(state),
  };
}
