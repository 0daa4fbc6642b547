import "server-only";
import { asc, eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { ownSignals } from "@/db/schema/learning";
import { people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import { readScorerInUse } from "../learning/held-scorer";
import { CATALOGUE, DIMENSION } from "./catalogue";
import { compileFormula } from "./own-formula";
import { type OwnRow, readWaitingSwitches, type WaitingSwitch } from "./own-rows";
import { MOST_OWN_SIGNALS, type OwnSignalView, type SignalsView } from "./own-schema";
import { formulasOf } from "./signal";
import { CATALOGUE_SPANS } from "./what-would-change";

/** The catalogue and the team's own signals, with what the scorer in use makes of each. */
export async function listSignals(ctx: Context): Promise<SignalsView> {
  demand(ctx, "scorer.read");
  const { version, signals, scorer } = await readScorerInUse(ctx.db);
  const weights = scorer.weights();
  const rows = await readOwn(ctx.db);
  const waiting = await readWaitingSwitches(ctx.db);
  return {
    signalSetVersion: signals.version,
    scorerVersion: version,
    catalogue: CATALOGUE.map((signal, s) => {
      const { from = 0, to = 0 } = CATALOGUE_SPANS[s] ?? {};
      return {
        key: signal.key,
        name: signal.name,
        sentence: signal.sentence,
        formulas: formulasOf(signal),
        needs: [...signal.needs],
        weights: [...weights.subarray(from, to)],
      };
    }),
    own: rows
      .filter(({ row }) => !row.isArchived)
      .map(({ row, createdBy }) => ownView(row, createdBy, waiting.get(row.id), weights)),
    room: roomLeft(rows.map(({ row }) => row)),
  };
}

/** Archived drafts leave room again; what has once been on keeps its place. */
export const roomLeft = (rows: readonly Pick<OwnRow, "isArchived" | "position">[]): number =>
  MOST_OWN_SIGNALS - rows.filter((row) => !row.isArchived || row.position !== null).length;

/** @throws KnownError not_found */
export async function ownViewOrThrow(db: Executor, id: string): Promise<OwnSignalView> {
  const [found] = (await readOwn(db)).filter(({ row }) => row.id === id);
  if (!found) throw notFound("The signal");
  const weights = (await readScorerInUse(db)).scorer.weights();
  return ownView(found.row, found.createdBy, (await readWaitingSwitches(db)).get(id), weights);
}

function readOwn(db: Executor): Promise<{ row: OwnRow; createdBy: string }[]> {
  return db
    .select({ row: ownSignals, createdBy: people.name })
    .from(ownSignals)
    .innerJoin(people, eq(people.id, ownSignals.createdBy))
    .orderBy(asc(ownSignals.createdAt), asc(ownSignals.id));
}

function ownView(
  row: OwnRow,
  createdBy: string,
  waiting: WaitingSwitch | undefined,
  weights: Float64Array,
): OwnSignalView {
  const { key, name, sentence, formula, middle, reach, state, revision, position } = row;
  return {
    signalId: row.id,
    key,
    name,
    sentence,
    formula,
    needs: [...(compileFormula(formula).formula?.needs ?? [])],
    middle,
    reach,
    state,
    revision,
    weight: state === "on" && position !== null ? (weights[DIMENSION + position] ?? null) : null,
    mayEdit: position === null && !waiting,
    waiting: waiting ? { ...waiting, proposedAt: waiting.proposedAt.toISOString() } : null,
    createdBy,
    changedAt: row.changedAt.toISOString(),
  };
}
