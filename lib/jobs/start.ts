import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import { sharedDatabase } from "@/db/client";
import { rankingOf } from "../cases/ranking/ranking";
import { environment } from "../env";
import { faultOf } from "../fault";
import { noteInstalled } from "../installed";
import { log } from "../log";
import { newId } from "../new-id";
import { prepareInstallation } from "./prepare";
import { JOBS } from "./registry";
import { type Scheduler, startScheduler } from "./scheduler";

const RETRY_MS = 5_000;

/**
 * Begins the server's own work as soon as the database is reachable and migrated, and ends it with the process.
 * Until then the app answers that it is getting ready.
 * @throws Error where the environment cannot be used
 */
export function startServerWork(): void {
  const db = sharedDatabase(environment().DATABASE_URL);
  const now = () => new Date();
  const ended = new AbortController();
  const scheduler = whenPrepared(async () => {
    const actor = { kind: "system" as const, job: "start" };
    await prepareInstallation({ db, now, actor, requestId: newId(), idempotency: null });
    noteInstalled();
    // Loaded before the first reviewer asks for the queue.
    rankingOf(db);
    return startScheduler({ db, now }, JOBS);
  }, ended.signal);
  process.once("SIGTERM", () => {
    ended.abort();
    const stopped = scheduler.then((running) => running?.stop());
    exitAfter(stopped);
  });
}

async function whenPrepared(
  prepare: () => Promise<Scheduler>,
  ended: AbortSignal,
): Promise<Scheduler | null> {
  let said = "";
  while (!ended.aborted) {
    try {
      return await prepare();
    } catch (error) {
      const { stack: _, ...fault } = faultOf(error);
      const text = JSON.stringify(fault);
      if (text !== said) log.error(fault, "The server cannot begin its work yet; it tries again by itself");
      said = text;
    }
    // Waiting is no reason to keep a process alive, and being asked to end no fault.
    await sleep(RETRY_MS, undefined, { ref: false, signal: ended }).catch(() => undefined);
  }
  return null;
}

/** Next ends the process once its requests are answered; jobs that run get the same courtesy. */
function exitAfter(stopped: Promise<unknown>): void {
  const exit = process.exit.bind(process);
  const exitLater = (code?: number | string | null) => {
    void stopped.finally(() => exit(code));
  };
  process.exit = exitLater as typeof process.exit;
}
