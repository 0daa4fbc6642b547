import "server-only";
import { databaseErrno } from "@/db/errors";
import type { Context } from "../context";
import { refuseOldSchema } from "../health";
import { ensureScorerInUse } from "../learning/install";
import { ensureFirstAdministrator } from "../people/first-administrator";
import { ensureFirstPolicy } from "../policy/install";

/**
 * What must be there before a server works by itself: the schema it knows, a policy, a scorer, and the administrator
 * that the environment names. Servers that start together agree. @throws Error that says what is missing
 */
export async function prepareInstallation(ctx: Context): Promise<void> {
  await refuseMissingSchema(ctx);
  await ensureFirstPolicy(ctx);
  await ensureFirstAdministrator(ctx);
  await ensureScorerInUse(ctx);
}

const NO_SUCH_TABLE = 1146;

async function refuseMissingSchema(ctx: Context): Promise<void> {
  try {
    await refuseOldSchema(ctx.db);
  } catch (error) {
    if (databaseErrno(error) !== NO_SUCH_TABLE) throw error;
    throw new Error("The database has not been migrated; npm start does that");
  }
}
