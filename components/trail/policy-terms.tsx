import { leavesOf } from "@/lib/policy/changes";
import type { PolicyRecord } from "@/lib/policy/schema";
import { Time } from "../ui/time";
import { FactList } from "./fact-list";

/** The policy a decision fell under: its lines, who stood for it, and every term. */
export function PolicyUsed({ policy }: { policy: PolicyRecord }) {
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
        <summary className="text-small">All terms</summary>
        <FactList facts={Object.fromEntries(leavesOf(policy.terms))} />
      </details>
    </>
  );
}
