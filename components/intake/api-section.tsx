import Link from "next/link";
import type { KeyView } from "@/lib/keys/schema";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";

const REQUEST = (origin: string) => `curl ${origin}/api/transactions \\
  -H "Authorization: Bearer $CUPEL_KEY" \\
  -H "Content-Type: application/json" \\
  -d '{"transactions": [{
    "externalId": "T-4711",
    "occurredAt": "2026-03-01T09:30:00Z",
    "amount": "129.90",
    "currency": "EUR",
    "channel": "card_remote",
    "accountId": "A-17",
    "counterpartyId": "SHOP-3"
  }]}'`;

type ApiSectionProps = {
  /** Where this installation is reached. */
  origin: string;
  /** Keys that may send payments; null for those who may not read about keys. */
  keys: readonly KeyView[] | null;
};

export function ApiSection({ origin, keys }: ApiSectionProps) {
  return (
    <Section
      title="Sending by API"
      lead="A payment system sends each payment as it happens and is told at once what to do with it."
    >
      <div className="flex max-w-[70ch] flex-col gap-3">
        <p>
          <code>POST /api/transactions</code> takes 1 to 1000 payments and answers one result for each, in
          order: pass, review or hold. A bad one never costs the others. After a request without an answer,
          send the same again: a payment that is in already is a duplicate and gets its first result.
        </p>
        <section
          aria-label="Example of a request"
          // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reachable by keyboard (WCAG 2.1.1)
          tabIndex={0}
          className="overflow-x-auto border border-rule bg-raised"
        >
          <pre className="p-3 text-small">
            <code>{REQUEST(origin)}</code>
          </pre>
        </section>
        <p className="text-soft">
          Every field and answer is in the{" "}
          <a href="/api/openapi.json" className="underline">
            description of the API
          </a>{" "}
          (OpenAPI).
        </p>
      </div>
      {keys && <KeyTable keys={keys} />}
    </Section>
  );
}

function KeyTable({ keys }: { keys: readonly KeyView[] }) {
  return (
    <div className="mt-6">
      <h3 className="mb-2 font-strong">Keys that may send payments</h3>
      {keys.length === 0 ? (
        <EmptyState title="No key may send payments yet">
          An administrator adds one on the page{" "}
          <Link href="/people" className="underline">
            People
          </Link>
          .
        </EmptyState>
      ) : (
        <Table caption="Keys that may send payments, and when each was last used" captionHidden>
          <thead>
            <tr>
              <Th>Name</Th>
              <Th>Source</Th>
              <Th>Last use</Th>
              <Th>Standing</Th>
            </tr>
          </thead>
          <tbody>
            {keys.map(({ id, name, source, lastUsedAt, revokedAt }) => (
              <tr key={id} className={revokedAt ? "text-soft" : ""}>
                <RowTh>{name}</RowTh>
                <Td className="font-mono">{source}</Td>
                <Td>{lastUsedAt ? <Time at={lastUsedAt} /> : "never"}</Td>
                <Td>
                  {revokedAt ? (
                    <>
                      Revoked <Time at={revokedAt} />
                    </>
                  ) : (
                    "In use"
                  )}
                </Td>
              </tr>
            ))}
          </tbody>
        </Table>
      )}
    </div>
  );
}
