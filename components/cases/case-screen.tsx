"use client";
import { useQuery, useQueryClient } from "@tanstack/react-query";
import { useState } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { api } from "../api";
import { BalanceAxis } from "../case/balance-axis";
import { CaseHead } from "../case/case-head";
import { Cautions } from "../case/cautions";
import { Decisions } from "../case/decisions";
import { silentSignals } from "../case/evidence-rows";
import { Facts } from "../case/facts";
import { Links } from "../case/links";
import { Notes } from "../case/notes";
import { ScoresOverTime } from "../case/scores-over-time";
import { SignalBars } from "../case/signal-bars";
import { Timeline } from "../case/timeline";
import { WithoutSignals } from "../case/without-signals";
import { Section } from "../ui/section";
import { CaseActions } from "./case-actions";
import { CaseStanding } from "./case-standing";
import { NoteForm } from "./note-form";

export type CaseRights = { personId: string; mayWork: boolean; mayCorrect: boolean; mayAssign: boolean };

/** One case with all that is known of it, under an address of its own. */
export function CaseScreen({ initial, ...rights }: CaseRights & { initial: CaseView }) {
  const key = ["case", initial.caseId];
  const client = useQueryClient();
  const { data: view } = useQuery({
    queryKey: key,
    queryFn: ({ signal }) =>
      api("GET /api/cases/{id}", { id: initial.caseId }, { signal }) as Promise<CaseView>,
    initialData: initial,
  });
  const [done, setDone] = useState("");
  const afterChange = (words: string) => {
    setDone(words);
    void client.invalidateQueries({ queryKey: key });
  };
  const decided = view.decisions.some((decision) => decision.stands);
  return (
    <>
      <div className="mb-4 flex flex-wrap items-start justify-between gap-x-6 gap-y-3">
        <CaseHead view={view} level={1} />
        <CaseActions view={view} rights={rights} onDone={afterChange} />
      </div>
      <CaseStanding view={view} />
      <div role="status" className="empty:hidden">
        {done && <p className="mb-4 border-l-4 border-l-accent bg-raised px-3 py-2">{done}</p>}
      </div>
      <Section
        title="Balance of evidence"
        lead={decided ? "As it was shown with the verdict that stands." : "As the scorer weighs it now."}
      >
        <Evidence view={view} />
      </Section>
      <Section
        title="Scores over time"
        lead="Each can be derived again from the labels that the scorer had learned when it gave it."
      >
        <ScoresOverTime caseId={view.caseId} />
      </Section>
      <Section title="Verdicts">
        <Decisions decisions={view.decisions} linked />
      </Section>
      <Section title="Payment">
        <Facts transaction={view.transaction} />
      </Section>
      <Section
        title="Links"
        lead="Other payments that share something with it, under the signals that look at them."
      >
        <Links links={view.links} evidence={view.evidence} level={3} />
      </Section>
      <Section title="Notes">
        <div className="flex max-w-[70ch] flex-col gap-4">
          <Notes notes={view.notes} />
          {rights.mayWork && <NoteForm caseId={view.caseId} onDone={afterChange} />}
          {!rights.mayWork && view.notes.length === 0 && <p className="text-soft">None was written.</p>}
        </div>
      </Section>
      <Section title="Timeline">
        <Timeline entries={view.timeline} />
      </Section>
      <Section title="Bear in mind">
        <Cautions />
      </Section>
    </>
  );
}

function Evidence({ view }: { view: CaseView }) {
  const { evidence } = view;
  if (!evidence) return <p className="text-soft">The policy hides the score until the verdict is given.</p>;
  const silent = silentSignals(evidence);
  return (
    <>
      <BalanceAxis thresholds={evidence} rug={null} pointer={evidence} />
      <SignalBars evidence={evidence} most={evidence.signals.length} />
      <div className="mt-3">
        <WithoutSignals lines={evidence.withoutSignals} />
      </div>
      <p className="mt-3 text-small text-soft">
        Scorer “{evidence.scorerName}”, version {evidence.scorerVersion}; policy version{" "}
        {evidence.policyVersion}. Decibans are ten times the decimal logarithm of the odds: 0 is even odds,
        +10 is ten to one on fraud.
      </p>
      {silent.length > 0 && (
        <p className="mt-1 text-small text-soft">
          Not available: {silent.map((signal) => signal.name).join(", ")}.
        </p>
      )}
    </>
  );
}
