import "server-only";
import { isDuplicate } from "@/db/errors";
import { demand } from "../auth/demand";
import { labelsLearned } from "../cases/notify";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { readExemptFields } from "../transactions/intake-settings";
import { writeOnce } from "../write-once";
import { readOutcome } from "./read-item";
import type { OutcomeResult, OutcomesInput, OutcomesView } from "./schema";
import { storeOutcomes } from "./store";

/** Two senders of one outcome at once: the slower one finds the other's the next time round. */
const RACES_AT_MOST = 5;

/**
 * Takes in what became of payments, in one transaction: outcomes of known payments are applied at once, others are
 * kept until their payment arrives. @returns one result per item, in order; a bad item costs no other
 */
export async function receiveOutcomes(ctx: Context, input: OutcomesInput): Promise<OutcomesView> {
  demand(ctx, "outcomes.send");
  const source = sourceOf(ctx);
  const exempt = new Set<string>((await readExemptFields(ctx.db))[source] ?? []);
  const read = input.outcomes.map((item) => readOutcome(item, source, ctx.now(), exempt));
  for (let attempt = 1; ; attempt++) {
    let labels = 0;
    try {
      const answer = await writeOnce<OutcomesView>(ctx, async (tx) => {
        const stored = await storeOutcomes(tx, read, source, ctx.now());
        labels = stored.labels;
        await appendTrail(ctx, tx, {
          act: "outcomes.received",
          subjectKind: "source",
          subjectId: source || "person",
          facts: { ...countsOf(stored.results), labels },
        });
        return { results: stored.results };
      });
      if (labels > 0) labelsLearned();
      return answer;
    } catch (error) {
      if (attempt >= RACES_AT_MOST || !isDuplicate(error)) throw error;
    }
  }
}

/** Namespace of the sender's identifiers; people bring outcomes of any. */
function sourceOf({ actor }: Context): string {
  if (actor.kind === "key") return actor.source;
  return actor.kind === "person" ? (actor.key?.source ?? "") : "";
}

function countsOf(results: readonly OutcomeResult[]) {
  const count = (status: OutcomeResult["status"]) => results.filter((one) => one.status === status).length;
  return {
    created: count("created"),
    duplicates: count("duplicate"),
    rejected: count("rejected"),
    kept: results.filter((one) => one.status === "created" && !one.applied).length,
  };
}
