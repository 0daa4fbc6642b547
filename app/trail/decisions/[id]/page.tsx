import type { Metadata } from "next";
import { BalanceAxis } from "@/components/case/balance-axis";
import { silentSignals } from "@/components/case/evidence-rows";
import { SignalBars } from "@/components/case/signal-bars";
import { DecisionFacts } from "@/components/trail/decision-facts";
import { EntryTable } from "@/components/trail/entry-table";
import { PolicyUsed } from "@/components/trail/policy-used";
import { Notice } from "@/components/ui/notice";
import { Page, PageHead, Section } from "@/components/ui/section";
import { readDecisionRecord } from "@/lib/audit/decision-record";
import { DecisionRecordInput } from "@/lib/audit/schema";
import { forPage, pageContext } from "@/lib/auth/page-context";
import { notFound } from "@/lib/errors";
import { minorDigits } from "@/lib/money";
import { readBaseCurrency } from "@/lib/transactions/base-currency";

export const metadata: Metadata = { title: "Decision" };

export default async function DecisionPage({ params }: { params: Promise<{ id: string }> }) {
  const ctx = await pageContext("/trail/decisions/[id]");
  const input = DecisionRecordInput.safeParse(await params);
  const record = await forPage(
    ctx,
    "/trail/decisions/[id]",
    input.success ? readDecisionRecord(ctx, input.data) : Promise.reject(notFound("This decision")),
  );
  const { evidence } = record;
  const code = await readBaseCurrency(ctx.db);
  const silent = silentSignals(evidence);
  return (
    <Page wide>
      <PageHead title={`Decision on case ${record.case.number}`} lead="As it was when it was made." />
      <Section title="The decision">
        <DecisionFacts record={record} />
      </Section>
      <Section
        title="What was shown"
        lead={
          record.scoreWasHidden
            ? "From the numbers kept with the decision. The score was hidden until the verdict was given."
            : "From the numbers kept with the decision, with the lines as they lay then."
        }
      >
        <BalanceAxis thresholds={evidence} rug={null} pointer={evidence} />
        <SignalBars evidence={evidence} most={evidence.signals.length} />
        {silent.length > 0 && (
          <p className="mt-3 text-small text-soft">
            Not available: {silent.map((signal) => signal.name).join(", ")}.
          </p>
        )}
        <p className="mt-3 text-small text-soft">
          Scorer “{evidence.scorerName}”, version {evidence.scorerVersion} before the decision,{" "}
          {record.scorerVersionAfter} after it.
        </p>
        <Notice
          className="mt-3"
          kind={record.rederivedEqual ? "status" : "error"}
          title={
            record.rederivedEqual
              ? "The score comes out again, bit for bit, from the label log as it stood then."
              : "The label log as it stood then gives another score than the one kept with the decision."
          }
        />
      </Section>
      <Section title="The policy it fell under">
        <PolicyUsed policy={record.policy} currency={{ code, minorDigits: minorDigits(code) ?? 2 }} />
      </Section>
      <Section title="The trail of the case">
        <EntryTable caption="All that happened to the case, oldest first" entries={record.entries} />
      </Section>
    </Page>
  );
}
