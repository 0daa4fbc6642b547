import "server-only";
import type { Database } from "@/db/client";
import { log } from "../../log";
import { listenToCases } from "../notify";
import { RankingModel } from "./model";

const POLL_MS = 250;
/** After a failed poll: the database is away, and hammering it would not bring it back. */
const POLL_AFTER_FAILURE_MS = 2_000;

type Followed = { model: RankingModel; stop: () => void };

// Pages, route handlers and instrumentation each have their own copy of a module; the ranking is one per process and
// database. The database's handle is one per process and address (`sharedDatabase`), so it serves as the key.
const shared = globalThis as typeof globalThis & { cupelRankings?: WeakMap<Database, Followed> };
shared.cupelRankings ??= new WeakMap();
const rankings = shared.cupelRankings;

/** The ranking of this database, followed from the first call on. */
export function rankingOf(db: Database): RankingModel {
  const present = rankings.get(db) ?? follow(db);
  rankings.set(db, present);
  return present.model;
}

/** Ends the following, and forgets the ranking. */
export function stopRanking(db: Database): void {
  rankings.get(db)?.stop();
  rankings.delete(db);
}

function follow(db: Database): Followed {
  const model = new RankingModel(db);
  let stopped = false;
  let timer: NodeJS.Timeout | undefined;
  const failed = (error: unknown) => {
    // A pool that was closed will not come back: the process or the test is ending.
    if (isClosedPool(error)) stop();
    else if (!stopped) log.error({ err: error }, "The ranking could not be brought forward");
  };
  const wake = (caseIds: readonly string[]) => {
    model.catchUp(caseIds).catch(failed);
  };
  const unlisten = listenToCases({
    casesChanged: wake,
    casesRescored: (caseIds) => model.takeInLater(caseIds),
    labelsLearned: () => wake([]),
  });
  const poll = async () => {
    let waitMs = POLL_MS;
    try {
      await model.catchUp([], true);
    } catch (error) {
      failed(error);
      waitMs = POLL_AFTER_FAILURE_MS;
    }
    if (!stopped) timer = setTimeout(() => void poll(), waitMs).unref();
  };
  const stop = () => {
    stopped = true;
    clearTimeout(timer);
    unlisten();
  };
  void poll();
  return { model, stop };
}

function isClosedPool(error: unknown): boolean {
  for (let e = error; e instanceof Error; e = e.cause) {
    if (e.message === "Pool is closed.") return true;
  }
  return false;
}
