import { createDatabase } from "@/db/client";
import { importJobs } from "@/lib/imports/jobs";
import { newId } from "@/lib/new-id";

/** The imports' part of a server, as a process of its own that a test can kill. */
const { db } = createDatabase(process.env.DATABASE_URL ?? "");
const now = new Date(process.env.RUNNER_NOW ?? "");
for (const job of importJobs) {
  await job.run(
    {
      db,
      now: () => now,
      actor: { kind: "system", job: job.name },
      requestId: newId(),
      idempotency: null,
    },
    new AbortController().signal,
  );
}
