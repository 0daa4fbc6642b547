import type { Typology, Verdict } from "../../lib/decisions/codes";
import { formatAmount } from "../../lib/money";
import type { Channel } from "../../lib/transactions/codes";
import type { Account } from "./accounts";

/** What really happened, as the reviewers of the scenario will find out. */
export type Truth = { verdict: Verdict; typology: Typology | null };

export const GENUINE: Truth = { verdict: "legitimate", typology: null };
export const fraud = (typology: Typology): Truth => ({ verdict: "fraudulent", typology });

export type Payment = {
  at: Date;
  account: Account;
  channel: Channel;
  amountMinor: number;
  counterpartyId: string;
  counterpartyName: string;
  mcc?: string;
  deviceId?: string;
  ipAddress?: string;
  counterpartyCountry?: string;
  authentication?: "strong" | "single" | "none" | "exempt";
  ruleHits?: string[];
  truth: Truth;
};

export type DemoTransaction = { item: Record<string, unknown>; truth: Truth; at: Date };

/** The payment as an integrator's system would send it. */
export function asSent(payment: Payment, externalId: string): DemoTransaction {
  const { at, account, amountMinor, truth, ...rest } = payment;
  const card = rest.channel.startsWith("card") || rest.channel === "cash_withdrawal";
  return {
    at,
    truth,
    item: {
      externalId,
      occurredAt: at.toISOString(),
      amount: formatAmount(amountMinor, "EUR"),
      currency: "EUR",
      direction: "outgoing",
      accountId: account.id,
      accountCountry: "IE",
      accountOpenedAt: account.openedAt.toISOString(),
      ...(card && { cardRef: account.cardRef }),
      ...rest,
    },
  };
}
