import "server-only";
import { eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { settings } from "@/db/schema/people";

const DEFAULT_CURRENCY = "EUR";

/** ISO 4217 code of the currency that amounts are compared and losses are booked in. */
export async function readBaseCurrency(db: Executor): Promise<string> {
  const [row] = await db
    .select({ value: settings.value })
    .from(settings)
    .where(eq(settings.key, "baseCurrency"));
  return typeof row?.value === "string" ? row.value : DEFAULT_CURRENCY;
}
