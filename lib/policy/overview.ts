import "server-only";
import { asc, desc, eq, ne } from "drizzle-orm";
import { policies } from "@/db/schema/policies";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { natsToDecibans } from "../decibans";
import { minorDigits } from "../money";
import { readBaseCurrency } from "../transactions/base-currency";
import { newestApproved, policyInForce } from "./read";
import { histogramOf, newestScores } from "./recent-scores";
import { listRecords } from "./records";
import type { PolicyRecord, PolicyView } from "./schema";
import { thresholdsInForce } from "./thresholds";

const HISTORY_SHOWN = 100;
const PROJECTION_DAYS = 14;
/** More would tell the eye nothing, and cost a reader seconds. */
const PROJECTION_SCORES = 200_000;

/** The terms in force, what waits for approval, what was before, and the recent scores to project on. */
export async function readPolicy(ctx: Context): Promise<PolicyView> {
  demand(ctx, "policy.read");
  const { db } = ctx;
  const now = ctx.now();
  const inForce = await policyInForce(db, now);
  const since = new Date(now.getTime() - PROJECTION_DAYS * 86_400_000);
  const [lines, newest, records, pending, history, recent, baseCurrency] = await Promise.all([
    thresholdsInForce(db, inForce, now),
    newestApproved(db),
    listRecords(db, eq(policies.version, inForce.version), asc(policies.version)),
    listRecords(db, eq(policies.state, "proposed"), asc(policies.proposedAt)),
    listRecords(db, ne(policies.state, "proposed"), desc(policies.settledAt), HISTORY_SHOWN),
    newestScores(db, PROJECTION_SCORES, since).then((scores) => histogramOf(db, scores)),
    readBaseCurrency(db),
  ]);
  return {
    inForce: records[0] as PolicyRecord,
    reviewDecibans: natsToDecibans(lines.reviewLogit),
    holdDecibans: natsToDecibans(lines.holdLogit),
    pending,
    history,
    newestVersion: newest.version,
    recent,
    baseCurrency: { code: baseCurrency, minorDigits: minorDigits(baseCurrency) ?? 2 },
  };
}
