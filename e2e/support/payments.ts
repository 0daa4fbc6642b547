import { newId } from "@/lib/new-id";
import type { Channel } from "@/lib/transactions/codes";

export type SentPayment = Record<string, unknown> & { externalId: string; accountId: string };

/**
 * Payments that no policy of the demo lets pass: an account opened today spends at night through a device nobody has
 * seen, at a shop where stolen details are tried, without authentication.
 */
export function suspiciousPayments(count: number, channel: Channel = "card_remote"): SentPayment[] {
  const account = `E2E-${newId().slice(-12)}`;
  return Array.from({ length: count }, (_, index) => ({
    // A letter behind digits: twelve of them and one more might pass for a card's number, which intake refuses.
    externalId: `${account}-${String.fromCharCode(97 + index)}`,
    occurredAt: new Date(Date.now() - (count - index) * 120_000).toISOString(),
    amount: (741.5 + index).toFixed(2),
    currency: "EUR",
    channel,
    accountId: account,
    accountCountry: "IE",
    accountOpenedAt: new Date(Date.now() - 3_600_000).toISOString(),
    counterpartyId: "WEB-8",
    counterpartyName: "Cardamom Gift Vouchers",
    counterpartyCountry: "NL",
    mcc: "5947",
    ...(channel.startsWith("card") && { cardRef: `card-${account}` }),
    deviceId: `dev-${account}`,
    ipAddress: "198.51.100.23",
    authentication: "none",
    ruleHits: ["small-amount-burst"],
  }));
}
