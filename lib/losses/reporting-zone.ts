import "server-only";
import { eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { settings } from "@/db/schema/people";

const DEFAULT_ZONE = "UTC";

/** IANA name of the time zone whose Mondays part one week's losses from the next; one for the whole institution. */
export async function readReportingZone(db: Executor): Promise<string> {
  const [row] = await db
    .select({ value: settings.value })
    .from(settings)
    .where(eq(settings.key, "reportingTimeZone"));
  return typeof row?.value === "string" ? row.value : DEFAULT_ZONE;
}
