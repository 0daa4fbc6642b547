import "server-only";
import { desc, eq, isNotNull } from "drizzle-orm";
import type { Database } from "@/db/client";
import { labelLog } from "@/db/schema/scorers";
import { transactions } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { scopeOf } from "./formula-fields";
import { figuresOf } from "./own-figures";
import { compileFormula, type Formula } from "./own-formula";
import type { SignalPreview, SignalPreviewInput } from "./own-schema";
import { FORMULA_COLUMNS } from "./read-signal-set";

const NEWEST = 500;
/** Labels lag behind payments, so those are looked at for themselves. */
const NEWEST_LABELLED = 1_000;

/** Says what is wrong with a formula and where, or what it measures on the newest payments. Nothing is kept. */
export async function previewSignal(ctx: Context, input: SignalPreviewInput): Promise<SignalPreview> {
  demand(ctx, "scorer.manage");
  const { formula, problem } = compileFormula(input.formula);
  if (!formula) return { problem, needs: [], figures: null };
  const { middle, reach } = input;
  const scale = middle === undefined || reach === undefined ? null : { middle, reach };
  const [measured, labelled] = await Promise.all([
    measureNewest(ctx.db, formula),
    measureLabelled(ctx.db, formula),
  ]);
  return { problem: null, needs: [...formula.needs], figures: figuresOf(measured, labelled, scale) };
}

async function measureNewest(db: Database, formula: Formula) {
  const rows = await db
    .select({ externalId: transactions.externalId, payment: FORMULA_COLUMNS })
    .from(transactions)
    .orderBy(desc(transactions.seq))
    .limit(NEWEST);
  return rows.map(({ externalId, payment }) => ({ externalId, value: formula.measure(scopeOf(payment)) }));
}

/** By the newest rows of the label log; a payment that it names twice counts once. */
async function measureLabelled(db: Database, formula: Formula) {
  const newest = db
    .select({ transactionId: labelLog.transactionId })
    .from(labelLog)
    .orderBy(desc(labelLog.seq))
    .limit(NEWEST_LABELLED)
    .as("newest");
  const rows = await db
    .selectDistinct({ id: transactions.id, label: transactions.label, payment: FORMULA_COLUMNS })
    .from(newest)
    .innerJoin(transactions, eq(transactions.id, newest.transactionId))
    .where(isNotNull(transactions.label));
  return rows.map(({ label, payment }) => ({
    label: label as number,
    value: formula.measure(scopeOf(payment)),
  }));
}
