"use client";
import { useRouter } from "next/navigation";
import { parseAsString, useQueryState } from "nuqs";
import { useState } from "react";
import type { PassedView } from "@/lib/learning/passed-schema";
import type { PolicyRecord, PolicyTerms, PolicyView } from "@/lib/policy/schema";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Page, PageHead, Section } from "../ui/section";
import { Time } from "../ui/time";
import { PolicyHistory } from "./history";
import { PolicyFigures } from "./policy-figures";
import { ProposalEditor } from "./proposal-editor";
import { ScoresSection } from "./scores-section";
import { TermsInForce } from "./terms-in-force";
import { WaitingProposal } from "./waiting-proposal";

type PolicyScreenProps = {
  view: PolicyView;
  /** Fraud among what the review line lets pass. */
  passed: PassedView;
  personId: string;
  mayPropose: boolean;
  mayApprove: boolean;
};

/** The editor starts from the newest version's terms. */
const FROM_NEWEST = "newest";

export function PolicyScreen({ view, passed, personId, mayPropose, mayApprove }: PolicyScreenProps) {
  const router = useRouter();
  // Which terms the form starts from is part of the address: "newest", or the record whose terms to put back.
  const [from, setFrom] = useQueryState("propose", parseAsString);
  const [drafted, setDrafted] = useState<PolicyTerms | null>(null);
  const [said, setSaid] = useState<string | null>(null);
  const { inForce, newestVersion, pending, history, recent, baseCurrency } = view;
  const newest = history.find(({ version }) => version === newestVersion) ?? inForce;
  const start = from === null || !mayPropose ? null : startOf(from, newest, history);
  const open = (id: string) => {
    setSaid(null);
    setDrafted(null);
    void setFrom(id);
  };
  const close = () => {
    setDrafted(null);
    void setFrom(null);
  };
  const done = (words: string) => {
    setSaid(words);
    close();
    router.refresh();
  };
  return (
    <Page>
      <PageHead
        title="Policy"
        lead="What becomes a case, in which order cases are worked, and what decisions cost. It takes two people to change it: one proposes, another approves."
      >
        {mayPropose && !start && (
          <Button look="action" onClick={() => open(FROM_NEWEST)}>
            Propose a change
          </Button>
        )}
      </PageHead>
      <div aria-live="polite">{said && <Notice className="mb-5">{said}</Notice>}</div>
      <PolicyFigures view={view} passed={passed} />
      {newest.version !== inForce.version && newest.effectiveAt && (
        <Notice kind="caution" className="mb-5" title={`Version ${newest.version} is approved`}>
          It comes into force <Time at={newest.effectiveAt} />.
        </Notice>
      )}
      <ScoresSection view={view} drafted={start ? (drafted ?? start) : null} />
      {start && (
        <ProposalEditor
          key={`${from} ${newestVersion}`}
          view={view}
          base={newest.terms}
          start={start}
          onLines={setDrafted}
          onDone={() => done("Proposed. It waits for somebody else to approve it.")}
          onCancel={close}
        />
      )}
      <Section title="Waiting for approval">
        {pending.length === 0 ? (
          <EmptyState title="Nothing waits for approval">
            Proposals stand here until somebody else settles them.
          </EmptyState>
        ) : (
          <div className="flex flex-col gap-4">
            {pending.map((proposal, index) => (
              <WaitingProposal
                key={proposal.policyId}
                proposal={proposal}
                place={index + 1}
                newestVersion={newestVersion}
                base={baseOf(proposal, newest, history).terms}
                recent={recent}
                currency={baseCurrency}
                personId={personId}
                mayApprove={mayApprove}
                onDone={done}
              />
            ))}
          </div>
        )}
      </Section>
      <Section title="Terms in force" lead={`Version ${inForce.version}. ${inForce.reason}`}>
        <TermsInForce terms={inForce.terms} currency={baseCurrency} />
      </Section>
      <Section title="History" lead="Every version and every proposal that was settled.">
        <PolicyHistory view={view} onProposeAgain={mayPropose ? ({ policyId }) => open(policyId) : null} />
      </Section>
    </Page>
  );
}

function startOf(from: string, newest: PolicyRecord, history: readonly PolicyRecord[]): PolicyTerms {
  return (history.find(({ policyId }) => policyId === from) ?? newest).terms;
}

/** What a proposal was made against; the newest version, unless another was approved since. */
function baseOf(
  { basedOnVersion }: PolicyRecord,
  newest: PolicyRecord,
  history: readonly PolicyRecord[],
): PolicyRecord {
  return history.find(({ version }) => version !== null && version === basedOnVersion) ?? newest;
}
