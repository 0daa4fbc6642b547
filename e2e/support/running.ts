import { accountUrls } from "../../db/server/mariadb.mjs";
import { findOccupant } from "../../db/server/occupancy.mjs";

/** The services behind the app under test: read its mail with `readMail`/`awaitMail` of tests/support/mailbox. */
export function running(): { mailUrl: string; databaseUrl: string } {
  const folder = process.env.CUPEL_E2E_DATA ?? "";
  const occupant = findOccupant(folder);
  if (!occupant?.mailUrl || !occupant.databasePort) throw new Error(`No app runs on ${folder}`);
  return { mailUrl: occupant.mailUrl, databaseUrl: accountUrls(folder, occupant.databasePort).url };
}
