import "server-only";
import { createHash, randomBytes } from "node:crypto";
import type { Database } from "@/db/client";
import { type RenderedMail, weeklySummaryMail } from "@/emails/weekly-summary";
import { readBaseCurrency } from "../transactions/base-currency";
import { weekFigures } from "./read";
import { readReportingZone } from "./reporting-zone";
import type { WeekView } from "./schema";
import { weekView } from "./view";

/** The week as screens, API and mail show it. @throws RangeError for a week that does not exist */
export async function readWeekView(
  db: Database,
  question: { week: string; by: "transaction" | "booking"; now: Date },
): Promise<WeekView> {
  const [timeZone, currency] = await Promise.all([readReportingZone(db), readBaseCurrency(db)]);
  return weekView(await weekFigures(db, { ...question, timeZone }), currency);
}

export type PersonalSummary = RenderedMail & { headers: Record<string, string>; unsubscribeHash: Buffer };

/**
 * The summary for one recipient, with a secret address of its own by which it can be unsubscribed from in one click
 * (RFC 8058). It is found again by its hash; the message that is kept holds it, and is never shown with it.
 */
export async function composeSummary(view: WeekView, appUrl: string): Promise<PersonalSummary> {
  const token = randomBytes(32).toString("base64url");
  const mail = await weeklySummaryMail({ view, appUrl, unsubscribeUrl: `${appUrl}/unsubscribe/${token}` });
  return {
    ...mail,
    headers: {
      "List-Unsubscribe": `<${appUrl}/api/unsubscribe/${token}>`,
      "List-Unsubscribe-Post": "List-Unsubscribe=One-Click",
    },
    unsubscribeHash: hashOfToken(token),
  };
}

export const hashOfToken = (token: string): Buffer => createHash("sha256").update(token).digest();

/** The message as it may be shown to others: without the secret that ends somebody's subscription. */
export const withoutToken = (text: string): string =>
  text.replace(/(\/unsubscribe\/)[A-Za-z0-9_-]{43}/g, "$1hidden");
