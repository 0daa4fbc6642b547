import "server-only";
import { randomBytes } from "node:crypto";
import { inArray } from "drizzle-orm";
import type { Database, Executor } from "@/db/client";
import { settings } from "@/db/schema/people";
import { ExemptFields } from "./schema";

export const EXEMPT_FIELDS_KEY = "exemptIdentifierFields";
const SAMPLE_SECRET_KEY = "sampleSecret";
const SECRET_BYTES = 32;

export type IntakeSettings = {
  /** Identifier fields of the source that may hold what looks like a card number. */
  exempt: ReadonlySet<string>;
  /** Made once per installation; decides with a payment's identifier whether it is drawn as a sample. */
  sampleSecret: Buffer;
};

export async function readIntakeSettings(db: Database, source: string, now: Date): Promise<IntakeSettings> {
  const stored = await readSettings(db);
  const sampleSecret = stored.get(SAMPLE_SECRET_KEY) ?? (await makeSampleSecret(db, now));
  if (typeof sampleSecret !== "string") throw new Error(`The setting ${SAMPLE_SECRET_KEY} is not usable`);
  return {
    exempt: new Set(exemptFieldsOf(stored)[source]),
    sampleSecret: Buffer.from(sampleSecret, "base64"),
  };
}

export async function readExemptFields(db: Executor): Promise<ExemptFields> {
  return exemptFieldsOf(await readSettings(db));
}

/** Without a prototype: a source may be called like something that every object has. */
function exemptFieldsOf(stored: Map<string, unknown>): ExemptFields {
  return Object.assign(Object.create(null), ExemptFields.parse(stored.get(EXEMPT_FIELDS_KEY) ?? {}));
}

async function readSettings(db: Executor): Promise<Map<string, unknown>> {
  const rows = await db
    .select({ key: settings.key, value: settings.value })
    .from(settings)
    .where(inArray(settings.key, [EXEMPT_FIELDS_KEY, SAMPLE_SECRET_KEY]));
  return new Map(rows.map(({ key, value }) => [key, value]));
}

/** Of two servers that make one at once, the first one's stays. */
async function makeSampleSecret(db: Database, now: Date): Promise<unknown> {
  const value = randomBytes(SECRET_BYTES).toString("base64");
  await db.insert(settings).ignore().values({ key: SAMPLE_SECRET_KEY, value, changedAt: now });
  return (await readSettings(db)).get(SAMPLE_SECRET_KEY);
}
