import { asc, eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { labelLog, scorers } from "@/db/schema/scorers";

/** Labels in force with their vectors, read from the log in the plainest way there is. */
export async function labelsHeld(db: Database) {
  const [inUse] = await db.select().from(scorers).where(eq(scorers.inUse, 1));
  if (!inUse) throw new Error("No scorer is in use");
  const log = await db.select().from(labelLog).orderBy(asc(labelLog.seq));
  const labelAt = new Map(log.map((row) => [row.place ?? row.seq, row.label]));
  const held = log.filter(({ place, seq }) => place === null && labelAt.get(seq) !== 0);
  return {
    options: inUse.options,
    labels: held.map(({ seq }) => labelAt.get(seq) as number),
    vectors: held.map(({ vector }) => bytesToVector(vector)),
  };
}
