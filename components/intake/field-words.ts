import { AUTHENTICATIONS, CHANNELS, DIRECTIONS } from "@/lib/transactions/codes";

/** What people read instead of the fields' names in the API. */
const FIELD_WORDS: Readonly<Record<string, string>> = {
  externalId: "Reference of the payment",
  occurredAt: "Time",
  amount: "Amount",
  currency: "Currency",
  channel: "Channel",
  accountId: "Account",
  counterpartyId: "Counterparty",
  direction: "Direction",
  remote: "Remote",
  counterpartyName: "Counterparty's name",
  cardRef: "Card token",
  deviceId: "Device",
  ipAddress: "IP address",
  mcc: "Merchant category",
  counterpartyCountry: "Counterparty's country",
  accountCountry: "Account's country",
  authentication: "Authentication",
  accountOpenedAt: "Account opened",
  upstreamScore: "Score of another system",
  ruleHits: "Rules that fired",
};

const TIME = "As 2026-03-01T09:30:00Z or with another offset";
const COUNTRY = "Two letters, such as FR (ISO 3166-1)";

/** How the cells of a column must be written, where that is not plain. */
export const FIELD_HINTS: Readonly<Record<string, string>> = {
  externalId: "Never the same for two payments of one source",
  occurredAt: TIME,
  amount: "As 129.90: a point before the cents, no thousands mark",
  currency: "Three letters, such as EUR (ISO 4217)",
  channel: `One of ${CHANNELS.join(", ")}`,
  direction: `One of ${DIRECTIONS.join(", ")}`,
  remote: "true or false",
  cardRef: "A token, never the card's number",
  mcc: "Four digits (ISO 18245)",
  counterpartyCountry: COUNTRY,
  accountCountry: COUNTRY,
  authentication: `One of ${AUTHENTICATIONS.join(", ")}`,
  accountOpenedAt: TIME,
  upstreamScore: "Between 0 and 1",
  ruleHits: "Set apart by semicolons",
};

/** "Amount", "Attribute basket"; a path that is neither stays as it is. */
export function fieldWords(path: string): string {
  if (path.startsWith("attributes.")) return `Attribute ${path.slice("attributes.".length)}`;
  return FIELD_WORDS[path] ?? path;
}
