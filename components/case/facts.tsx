import type { ReactNode } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { Amount } from "../ui/amount";
import { Time } from "../ui/time";
import { AUTHENTICATION_WORDS, DIRECTION_WORDS } from "../words";

type Transaction = CaseView["transaction"];

/** The payment as it was sent in; what the sender left out is left out here. */
export function Facts({ transaction: of }: { transaction: Transaction }) {
  return (
    <dl className="grid grid-cols-[repeat(auto-fill,minmax(13rem,1fr))] gap-x-6 gap-y-2">
      <Fact name="Counterparty" code>
        {of.counterpartyId}
      </Fact>
      <Fact name="Account" code>
        {of.accountId}
      </Fact>
      {of.cardRef && (
        <Fact name="Card" code>
          {of.cardRef}
        </Fact>
      )}
      {of.deviceId && (
        <Fact name="Device" code>
          {of.deviceId}
        </Fact>
      )}
      {of.ipAddress && (
        <Fact name="IP address" code>
          {of.ipAddress}
        </Fact>
      )}
      {(of.accountCountry || of.counterpartyCountry) && (
        <Fact name="Countries, account and counterparty">
          {of.accountCountry ?? "not given"} {"→"} {of.counterpartyCountry ?? "not given"}
        </Fact>
      )}
      {of.authentication && <Fact name="Authentication">{AUTHENTICATION_WORDS[of.authentication]}</Fact>}
      {of.amountBase && of.baseCurrency !== of.currency && (
        <Fact name="In base currency">
          <Amount amount={of.amountBase} currency={of.baseCurrency} />
        </Fact>
      )}
      {of.accountOpenedAt && (
        <Fact name="Account opened">
          <Time at={of.accountOpenedAt} as="day" />
        </Fact>
      )}
      {of.mcc && (
        <Fact name="Merchant category" code>
          {of.mcc}
        </Fact>
      )}
      <Fact name="Direction">
        {DIRECTION_WORDS[of.direction]}
        {of.remote === null ? "" : of.remote ? ", remote" : ", not remote"}
      </Fact>
      {of.upstreamScore !== null && (
        <Fact name="Sender's own score" code>
          {of.upstreamScore}
        </Fact>
      )}
      {of.ruleHits.length > 0 && <Fact name="Sender's rule hits">{of.ruleHits.join(", ")}</Fact>}
      {Object.entries(of.attributes).map(([name, value]) => (
        <Fact key={name} name={name} code>
          {String(value)}
        </Fact>
      ))}
      <Fact name={`Reference at ${of.source}`} code>
        {of.externalId}
      </Fact>
      <Fact name="Received">
        <Time at={of.receivedAt} />
      </Fact>
    </dl>
  );
}

function Fact({ name, code = false, children }: { name: string; code?: boolean; children: ReactNode }) {
  return (
    <div className="min-w-0">
      <dt className="text-small text-soft">{name}</dt>
      <dd className={`wrap-anywhere ${code ? "figures" : ""}`}>{children}</dd>
    </div>
  );
}
