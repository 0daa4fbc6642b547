import { createDatabase } from "@/db/client";
import { slotOfMinutes } from "@/lib/job";
import { runJob } from "@/lib/jobs/run-job";

/** One server process that tries to run one slot, and prints what came of it. */
const { db, close } = createDatabase(process.argv[2] ?? "", 2);
const now = () => new Date("2026-03-02T09:00:00Z");
const job = { name: "two-processes", everyMs: 1_000, slot: slotOfMinutes(15), run: async () => {} };
console.log(await runJob({ db, now }, job, new AbortController().signal));
await close();
