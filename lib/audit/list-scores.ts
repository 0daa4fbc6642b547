import "server-only";
import { asc, count, desc, eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { decisions } from "@/db/schema/cases";
import { people } from "@/db/schema/people";
import { scores } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { natsToDecibans, probabilityOf } from "../decibans";
import { unpackEvidence } from "../learning/evidence";
import { readLineage, stageOf } from "../learning/lineage";
import { caseScoresOrThrow } from "./case-scores";
import type { ScoresInput, ScoresView } from "./schema";

/** A payment linked to many others is scored anew with each of their labels. */
const SHOWN = 100;

/** Every score that the case's payment was given, oldest first. @throws KnownError not_found, forbidden */
export async function listScores(ctx: Context, { id }: ScoresInput): Promise<ScoresView> {
  demand(ctx, "cases.read");
  const { transactionId, hidden, mayDerive } = await caseScoresOrThrow(ctx, id);
  if (hidden) return { hidden, leftOut: 0, items: [] };
  const { db } = ctx;
  const lineage = await readLineage(db);
  const taken = await readTaken(db, transactionId);
  const rows = [...taken.rows, ...(await readShown(db, transactionId))];
  return {
    hidden,
    leftOut: taken.leftOut,
    items: rows
      .sort((a, b) => a.at.getTime() - b.at.getTime())
      .map(({ at, scorerVersion, logit, ...row }) => {
        const stage = stageOf(lineage, scorerVersion);
        return {
          ...row,
          at: at.toISOString(),
          scorer: stage && { name: stage.name, version: scorerVersion },
          totalDecibans: natsToDecibans(logit),
          probability: probabilityOf(logit),
          derivable: mayDerive,
        };
      }),
  };
}

async function readTaken(db: Database, transactionId: string) {
  const ofPayment = eq(scores.transactionId, transactionId);
  const newest = await db
    .select({
      id: scores.id,
      kind: scores.kind,
      at: scores.takenAt,
      scorerVersion: scores.scorerVersion,
      policyVersion: scores.policyVersion,
      logit: scores.logit,
    })
    .from(scores)
    .where(ofPayment)
    .orderBy(desc(scores.id))
    .limit(SHOWN);
  const [all] = await db.select({ n: count() }).from(scores).where(ofPayment);
  return {
    leftOut: (all?.n ?? 0) - newest.length,
    rows: newest.reverse().map(({ id, ...row }) => ({ ...row, scoreId: String(id), decision: null })),
  };
}

async function readShown(db: Database, transactionId: string) {
  const rows = await db
    .select({
      id: decisions.id,
      kind: decisions.kind,
      by: people.name,
      at: decisions.decidedAt,
      scorerVersion: decisions.scorerVersionBefore,
      policyVersion: decisions.policyVersion,
      evidence: decisions.evidence,
    })
    .from(decisions)
    .innerJoin(people, eq(people.id, decisions.personId))
    .where(eq(decisions.transactionId, transactionId))
    .orderBy(asc(decisions.decidedAt), asc(decisions.id));
  return rows.map(({ id, kind, by, evidence, ...row }) => ({
    ...row,
    scoreId: id,
    kind: "decision" as const,
    decision: { kind, by },
    logit: unpackEvidence(bytesToVector(evidence)).logit,
  }));
}
