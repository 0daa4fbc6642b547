import { AUTHENTICATIONS, CHANNELS } from "../transactions/codes";
import type { Facts } from "./facts";
import { asItIs, logScale, shareScale } from "./scale";
import { part, plural, type Signal } from "./signal";

/** One coordinate per value: 1 for the value the payment has, 0 for the others. */
const oneOf = (measure: string, values: readonly string[], value: (facts: Facts) => string | null) =>
  values.map((each) =>
    part(
      `1 where the ${measure} is ${each}, else 0`,
      (facts) => {
        const own = value(facts);
        return own === null ? null : Number(own === each);
      },
      asItIs,
    ),
  );

const inWords = (values: readonly string[]) => (measured: readonly number[]) =>
  (values[measured.findIndex((x) => x > 0.5)] ?? "unknown").replaceAll("_", " ");

const yesOrNo = (value: boolean | null) => (value === null ? null : Number(value));

export const contextSignals: readonly Signal[] = [
  {
    key: "cross_border",
    name: "Cross-border",
    sentence: "Whether the counterparty's country differs from the account's.",
    needs: ["accountCountry", "counterpartyCountry"],
    parts: [
      part(
        "1 where the two countries differ, else 0",
        ({ payment }) =>
          payment.accountCountry === null || payment.counterpartyCountry === null
            ? null
            : Number(payment.accountCountry !== payment.counterpartyCountry),
        asItIs,
      ),
    ],
    reading: ([flag = 0]) => (flag > 0 ? "another country" : "same country"),
  },
  {
    key: "channel",
    name: "Channel",
    sentence: "The way the payment was made; each channel has its own usual rate of fraud.",
    needs: ["channel"],
    parts: oneOf("channel", CHANNELS, ({ payment }) => payment.channel),
    reading: inWords(CHANNELS),
  },
  {
    key: "incoming",
    name: "Incoming payment",
    sentence: "Whether money comes into the account instead of leaving it.",
    needs: ["direction"],
    parts: [
      part(
        "1 where the payment is incoming, else 0",
        ({ payment }) => Number(payment.direction === "incoming"),
        asItIs,
      ),
    ],
    reading: ([flag = 0]) => (flag > 0 ? "incoming" : "outgoing"),
  },
  {
    key: "remote",
    name: "Made at a distance",
    sentence: "Whether the payment was started remotely, where the sender says so.",
    needs: ["remote"],
    parts: [part("1 where remote, else 0", ({ payment }) => yesOrNo(payment.remote), asItIs)],
    reading: ([flag = 0]) => (flag > 0 ? "remote" : "in person"),
  },
  {
    key: "authentication",
    name: "Strength of authentication",
    sentence: "How strongly the payer was authenticated.",
    needs: ["authentication"],
    parts: oneOf("authentication", AUTHENTICATIONS, ({ payment }) => payment.authentication),
    reading: inWords(AUTHENTICATIONS),
  },
  {
    key: "small_burst",
    name: "Burst of very small amounts",
    sentence:
      "How many payments of up to 5.00 the card, or the account without one, had in 24 hours: stolen details are tried out with them.",
    needs: ["accountId"],
    parts: [
      part(
        "number of payments of up to 5.00 in 24 h",
        ({ entities }) => (entities.card ?? entities.account)?.verySmallIn24h ?? null,
        logScale(0, 10),
        [{ from: 2, to: 5 }],
      ),
    ],
    reading: ([count = 0]) => plural(count, "very small payment"),
  },
  {
    key: "upstream_score",
    name: "The sender's own score",
    sentence: "The score that the sending system passes along.",
    needs: ["upstreamScore"],
    parts: [part("score", ({ payment }) => payment.upstreamScore, shareScale(0.5))],
    reading: ([score = 0]) => score.toFixed(2),
  },
  {
    key: "rule_hits",
    name: "Rules that fired at the sender",
    sentence: "How many of the sending system's rules the payment set off.",
    needs: ["ruleHits"],
    parts: [part("number of rule hits", ({ payment }) => payment.ruleHits, logScale(0, 10))],
    reading: ([count = 0]) => plural(count, "rule"),
  },
];
