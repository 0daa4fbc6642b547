import { escalateCase } from "@/lib/cases/escalate";
import { takeNextCase } from "@/lib/cases/next";
import type { CaseView } from "@/lib/cases/schema";
import { setCaseWaiting } from "@/lib/cases/wait";
import type { Context, PersonActor } from "@/lib/context";
import { correctDecision } from "@/lib/decisions/correct";
import { decideCase } from "@/lib/decisions/decide";
import type { Truth } from "./payment";
import type { Chance } from "./random";
import { type Clock, contextAt } from "./team";

const MISTAKES = 0.03;
const UNSURE = 0.15;

const NOTES = {
  fraudulent: [
    "Customer reached on the number on file: payment not made by them.",
    "Device never seen on this account; the real one was in use at home.",
    "Same pattern as the cases of this morning.",
  ],
  legitimate: [
    "Customer confirms the purchase.",
    "Regular payee, larger bill this month.",
    "Travelling, as announced.",
  ],
  customer_misuse: ["Delivered and signed for; the customer disputes it now."],
};

/** The longest that a reviewer looks at one case. */
export const MOST_SECONDS_A_CASE = 420;

export type Mistake = { caseId: string; truth: Truth };

/** One reviewer's part of a shift: takes what the queue serves and decides it, now and then wrongly. */
export async function workShift(
  ctx: Context,
  clock: Clock,
  chance: Chance,
  reviewer: PersonActor,
  cases: number,
  truthOf: (externalId: string) => Truth,
): Promise<Mistake[]> {
  const mistakes: Mistake[] = [];
  for (let count = 0; count < cases; count++) {
    const view = await takeNextCase(contextAt(ctx, reviewer, clock), { notThese: [] });
    if (!view) break;
    clock.set(new Date(clock.now().getTime() + chance.whole(60, MOST_SECONDS_A_CASE) * 1_000));
    const truth = truthOf(view.transaction.externalId);
    if (await setAside(contextAt(ctx, reviewer, clock), clock, chance, view)) continue;
    const finding = findingOf(chance, truth);
    if (finding.verdict !== truth.verdict) mistakes.push({ caseId: view.caseId, truth });
    await decideCase(contextAt(ctx, reviewer, clock), {
      id: view.caseId,
      ...finding,
      confidence: chance.hits(UNSURE) ? "unsure" : "sure",
      ...(chance.hits(0.25) && { note: chance.pick(NOTES[finding.verdict]) }),
      seenVersion: view.revision,
      scoreWasHidden: false,
      together: togetherOf(view, finding.verdict, truthOf),
    });
  }
  return mistakes;
}

export async function correctMistake(
  ctx: Context,
  clock: Clock,
  supervisor: PersonActor,
  { caseId, truth }: Mistake,
): Promise<void> {
  await correctDecision(contextAt(ctx, supervisor, clock), {
    id: caseId,
    ...truth,
    reason: "The customer's written statement says otherwise.",
  });
}

function findingOf(chance: Chance, truth: Truth): Truth {
  if (!chance.hits(MISTAKES)) return truth;
  return truth.verdict === "fraudulent"
    ? { verdict: "legitimate", typology: null }
    : { verdict: "fraudulent", typology: "other" };
}

/** Fraud on an account rarely comes alone: what else it paid that day is decided in the same act. */
function togetherOf(view: CaseView, verdict: Truth["verdict"], truthOf: (externalId: string) => Truth) {
  if (verdict !== "fraudulent") return [];
  return view.links
    .filter(
      (link) => link.together && link.verdict === null && (link.state === null || link.state === "open"),
    )
    .slice(0, 6)
    .map((link) => ({ transactionId: link.transactionId, ...truthOf(link.externalId) }));
}

async function setAside(ctx: Context, clock: Clock, chance: Chance, view: CaseView): Promise<boolean> {
  if (chance.hits(0.03)) {
    const until = new Date(clock.now().getTime() + chance.whole(2, 20) * 3_600_000).toISOString();
    await setCaseWaiting(ctx, { id: view.caseId, until, note: "Customer did not pick up; call again." });
    return true;
  }
  if (chance.hits(0.015)) {
    await escalateCase(ctx, { id: view.caseId, note: "Names a member of staff; please look at it." });
    return true;
  }
  return false;
}
