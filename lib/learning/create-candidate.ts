import "server-only";
import { count, eq, inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict, invalid, ruleBroken } from "../errors";
import { newId } from "../new-id";
import { createScorer, OptionsError, type Scorer, type ScorerOptions } from "../scorer";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockScorerInUse } from "./held-scorer";
import type { CandidateInput, CandidateView } from "./learning-schema";
import { optionsView } from "./options-view";

/** Each costs a learning step a label and a line on the Learning screen. */
const MOST_CANDIDATES = 5;

/**
 * Puts a further scorer beside the one in use. It begins untrained at the log's first row and catches up by itself
 * (`shadow.ts`), so that it is judged on the same labels.
 */
export async function createCandidate(ctx: Context, input: CandidateInput): Promise<CandidateView> {
  const person = demandPerson(ctx, "scorer.manage");
  return writeOnce(ctx, async (tx) => {
    // Candidates are made, promoted and dropped one at a time.
    const held = await lockScorerInUse(tx);
    const { dimension, offset } = held.scorer.options;
    const scorer = untrained({ method: input.method, dimension, offset, ...input.options });
    await refuseTakenName(tx, input.name);
    await refuseTooMany(tx);
    const id = newId();
    const now = ctx.now();
    await tx.insert(scorers).values({
      id,
      name: input.name,
      method: scorer.method,
      role: "candidate",
      signalSetVersion: held.signalSetVersion,
      options: { ...scorer.options },
      version: 0,
      logSeq: 0,
      state: Buffer.from(scorer.snapshot()),
      cumulativeLoss: 0,
      startedSeq: held.logSeq,
      createdAt: now,
      createdBy: person.personId,
      changedAt: now,
    });
    await appendTrail(ctx, tx, {
      act: "scorer.candidate_added",
      subjectKind: "scorer",
      subjectId: id,
      facts: { method: scorer.method, options: { ...scorer.options }, startedSeq: held.logSeq },
    });
    return {
      id,
      name: input.name,
      method: scorer.method,
      role: "candidate" as const,
      options: optionsView(scorer.options),
      startedAt: now.toISOString(),
      startedSeq: held.logSeq,
    };
  });
}

/** @throws KnownError invalid naming the option, or rule_broken for a method that cannot run on and on */
function untrained(options: ScorerOptions): Scorer {
  if (options.method === "leader")
    throw ruleBroken("A leader keeps every label and refits on all of them; it cannot run beside", "method");
  try {
    return createScorer(options);
  } catch (error) {
    if (!(error instanceof OptionsError)) throw error;
    const [key, ...rest] = error.message.split(" ");
    throw invalid([{ path: `options.${key}`, message: rest.join(" ") }]);
  }
}

async function refuseTakenName(tx: Tx, name: string): Promise<void> {
  const running = await tx
    .select({ name: scorers.name })
    .from(scorers)
    .where(inArray(scorers.role, ["in_use", "candidate"]));
  if (running.some((one) => one.name.toLowerCase() === name.toLowerCase()))
    throw conflict("Another scorer that runs has this name");
}

async function refuseTooMany(tx: Tx): Promise<void> {
  const [running] = await tx.select({ count: count() }).from(scorers).where(eq(scorers.role, "candidate"));
  if ((running?.count ?? 0) >= MOST_CANDIDATES)
    throw ruleBroken(
      `No more than ${MOST_CANDIDATES} candidates run beside the scorer in use; drop one first`,
    );
}
