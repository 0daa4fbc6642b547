import type { PolicyRecord } from "@/lib/policy/schema";
import type { Currency } from "../policy/term-values";
import { TermsInForce } from "../policy/terms-in-force";
import { Time } from "../ui/time";

type PolicyUsedProps = { policy: PolicyRecord; currency: Currency };

/** The policy a decision fell under: since when, who stood for it, and every term. */
export function PolicyUsed({ policy, currency }: PolicyUsedProps) {
  return (
    <>
      <p>
        Version {policy.version}
        {policy.effectiveAt && (
          <>
            , in force from <Time at={policy.effectiveAt} />
          </>
        )}
        . {policy.proposedBy ? `Proposed by ${policy.proposedBy.name}` : "Set up with the installation"}
        {policy.settledBy && `, approved by ${policy.settledBy.name}`}.
      </p>
      <p className="text-soft">{policy.reason}</p>
      <details className="mt-2">
        <summary className="mb-3 text-small">All terms</summary>
        <TermsInForce terms={policy.terms} currency={currency} />
      </details>
    </>
  );
}
