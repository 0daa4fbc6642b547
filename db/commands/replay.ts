import { createDatabase } from "@/db/client";
import { environment } from "@/lib/env";
import { replayLog } from "@/lib/learning/replay";
import { verifyTrail } from "@/lib/trail/verify";

/** `npm run replay`: lives the whole label log again and walks the trail; exits 1 where anything differs. */
const { db, close } = createDatabase(environment().DATABASE_URL, 2);
try {
  const startedMs = performance.now();
  const replay = await replayLog(db);
  const chain = await verifyTrail(db);
  const seconds = ((performance.now() - startedMs) / 1000).toFixed(1);
  const statesEqual = replay.differingStates.length === 0;
  const lossesEqual = replay.firstDifferingLoss === null && replay.cumulativeLossEqual;
  console.log(`Label log: ${replay.rows} rows, ${replay.labels} labels in force, replayed in ${seconds} s.`);
  console.log(
    `State:  ${statesEqual ? "identical bit for bit" : `DIFFERS for ${replay.differingStates.join(", ")}`}`,
  );
  console.log(
    `Losses: ${lossesEqual ? "identical bit for bit" : `DIFFER from row ${replay.firstDifferingLoss ?? "of the sum"}`}`,
  );
  console.log(
    `Trail:  ${chain.intact ? `${chain.entries} entries, chain intact` : `BROKEN at entry ${chain.firstBrokenSeq}`}`,
  );
  process.exitCode = statesEqual && lossesEqual && chain.intact ? 0 : 1;
} finally {
  await close();
}
