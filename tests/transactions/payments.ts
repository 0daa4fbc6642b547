/** Payments as a sender would put them, a minute apart, by a few accounts with a few counterparties. */
export function paymentItems(
  count: number,
  change: Record<string, unknown> = {},
  from = "2026-03-02T06:00:00Z",
) {
  return Array.from({ length: count }, (_, i) => ({
    externalId: `P-${i}`,
    occurredAt: new Date(Date.parse(from) + i * 60_000).toISOString(),
    amount: `${10 + ((i * 37) % 90)}.${String((i * 7) % 100).padStart(2, "0")}`,
    currency: "EUR",
    channel: "card_remote",
    accountId: `A-${i % 3}`,
    counterpartyId: `S-${i % 4}`,
    deviceId: i % 2 === 0 ? `D-${i % 5}` : undefined,
    cardRef: `C-${i % 3}`,
    counterpartyCountry: i % 7 === 0 ? "FR" : "DE",
    accountCountry: "DE",
    ...change,
  }));
}
