import { DAY_MS, HOUR_MS, hourOf } from "./facts";
import { asItIs, logScale, shareScale } from "./scale";
import { part, plural, roughly, type Signal } from "./signal";

export const timeSignals: readonly Signal[] = [
  {
    key: "account_age",
    name: "Age of the account",
    sentence: "How long the account has existed; many accounts opened for fraud are used within weeks.",
    needs: ["accountOpenedAt"],
    parts: [
      part(
        "days since the account was opened",
        ({ payment }) =>
          payment.accountOpenedAtMs === null
            ? null
            : Math.max(0, payment.occurredAtMs - payment.accountOpenedAtMs) / DAY_MS,
        logScale(365, 3_650),
      ),
    ],
    reading: ([days = 0]) => plural(days, "day"),
  },
  {
    key: "idle_time",
    name: "Time since the account's last payment",
    sentence: "How long the account was quiet before this payment, within the last 30 days.",
    needs: ["accountId"],
    parts: [
      part(
        "hours since the account's payment before",
        ({ idleMs }) => (idleMs === null ? null : idleMs / HOUR_MS),
        logScale(12, 720),
      ),
    ],
    reading: ([hours = 0]) => (hours < 48 ? `${roughly(hours)} h` : plural(hours / 24, "day")),
  },
  {
    key: "hour_of_day",
    name: "Hour of the day",
    sentence: "The time of day in UTC, as a point on the clock's circle.",
    needs: ["occurredAt"],
    parts: [
      part(
        "sin(2π · hour / 24)",
        ({ payment }) => Math.sin((Math.PI * hourOf(payment.occurredAtMs)) / 12),
        asItIs,
      ),
      part(
        "cos(2π · hour / 24)",
        ({ payment }) => Math.cos((Math.PI * hourOf(payment.occurredAtMs)) / 12),
        asItIs,
      ),
    ],
    reading: ([sine = 0, cosine = 1]) => {
      const minutes = Math.round(((Math.atan2(sine, cosine) * 720) / Math.PI + 1_440) % 1_440);
      const two = (n: number) => String(n).padStart(2, "0");
      return `${two(Math.floor(minutes / 60) % 24)}:${two(minutes % 60)} UTC`;
    },
  },
  {
    key: "unusual_hour",
    name: "Hour unusual for the account",
    sentence: "How small a share of the account's last 30 days lies within two hours of this time of day.",
    needs: ["accountId"],
    parts: [
      part(
        "1 − share of the account's payments in 30 d within 2 h of this hour",
        ({ nearHourShare }) => (nearHourShare === null ? null : 1 - nearHourShare),
        shareScale(0.75),
      ),
    ],
    reading: ([unusual = 0]) => `${roughly(100 * (1 - unusual))} % of its payments near this hour`,
  },
];
