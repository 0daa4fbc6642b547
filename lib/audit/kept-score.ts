import "server-only";
import { and, eq } from "drizzle-orm";
import type { RowDataPacket } from "mysql2/promise";
import type { Database } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { decisions } from "@/db/schema/cases";
import { scores } from "@/db/schema/transactions";
import { notFound } from "../errors";
import { unpackEvidence } from "../learning/evidence";
import { signalSetOfVersion } from "../learning/lineage";
import { fitVector } from "../signals/read-signal-set";

/** A score as the record has it. */
export type KeptScore = {
  scoreId: string;
  kind: "arrival" | "refresh" | "decision";
  at: Date;
  scorerVersion: number;
  vector: Float64Array;
  logit: number;
  /** Kept with a score by itself, but not with what was shown with a verdict. */
  leverage: number | null;
  /** What was shown with a verdict, as packed bytes. */
  evidence: Buffer | null;
};

/** By a score's number or a decision's id. @throws KnownError not_found, also where it is another payment's */
export async function keptScoreOrThrow(
  db: Database,
  transactionId: string,
  scoreId: string,
): Promise<KeptScore> {
  const kept = /^\d+$/.test(scoreId)
    ? await findTaken(db, transactionId, scoreId)
    : await findShown(db, transactionId, scoreId);
  if (!kept) throw notFound("This score of the case");
  return kept;
}

async function findTaken(db: Database, transactionId: string, scoreId: string): Promise<KeptScore | null> {
  const id = Number(scoreId);
  const [row] = await db
    .select()
    .from(scores)
    .where(and(eq(scores.id, id), eq(scores.transactionId, transactionId)));
  if (!row) return null;
  const { kind, takenAt: at, scorerVersion } = row;
  return {
    scoreId,
    kind,
    at,
    scorerVersion,
    vector: bytesToVector(row.vector),
    ...(await exactNumbers(db, id)),
    evidence: null,
  };
}

/** By a prepared statement, whose answer is binary: as text a double loses its last bit. */
async function exactNumbers(db: Database, id: number): Promise<{ logit: number; leverage: number }> {
  const [[row]] = await db.$client.execute<(RowDataPacket & { logit: number; leverage: number })[]>(
    "SELECT logit, leverage FROM scores WHERE id = ?",
    [id],
  );
  if (!row) throw new Error(`Score ${id} is not there`);
  return { logit: row.logit, leverage: row.leverage };
}

async function findShown(db: Database, transactionId: string, id: string): Promise<KeptScore | null> {
  const [row] = await db
    .select({
      at: decisions.decidedAt,
      scorerVersion: decisions.scorerVersionBefore,
      evidence: decisions.evidence,
      transactionId: scores.transactionId,
      vector: scores.vector,
    })
    .from(decisions)
    .innerJoin(scores, eq(scores.id, decisions.scoreId))
    .where(and(eq(decisions.id, id), eq(decisions.transactionId, transactionId)));
  if (!row) return null;
  const { at, scorerVersion, evidence } = row;
  // What was decided on may have been scored under an earlier set of signals; the evidence was not.
  const signals = await signalSetOfVersion(db, scorerVersion);
  return {
    at,
    scorerVersion,
    evidence,
    scoreId: id,
    kind: "decision",
    vector: await fitVector(db, signals, row.transactionId, row.vector),
    logit: unpackEvidence(bytesToVector(row.evidence)).logit,
    leverage: null,
  };
}
