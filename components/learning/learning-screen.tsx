"use client";
import { parseAsString, useQueryStates } from "nuqs";
import type { ApprovalsView } from "@/lib/approvals/schema";
import type { LearningView } from "@/lib/learning/learning-schema";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { Page, PageHead } from "../ui/section";
import { useZone } from "../ui/time";
import { ApprovalsSection } from "./approvals-section";
import { CalibrationSection } from "./calibration-section";
import { CurveSection } from "./curve-section";
import { driftLine } from "./drift-line";
import { DriftSection } from "./drift-section";
import { ExportSection } from "./export-section";
import { InfluenceSection } from "./influence-section";
import { LearningFigures } from "./learning-figures";
import { PassedSection } from "./passed-section";
import { ScorersSection } from "./scorers-section";
import {
  useApprovals,
  useComparison,
  useDrift,
  useInfluence,
  usePassed,
  useRenewal,
  useSignals,
} from "./use-learning";
import { windowOf } from "./window";

type LearningScreenProps = {
  /** As the server read them, and the window it was asked for. */
  first: { view: LearningView; approvals: ApprovalsView; asked: { from?: string; to?: string } };
  reviewDecibans: number;
  personId: string;
  mayManage: boolean;
  maySettle: boolean;
};

/** How well the scorer predicts what reviewers find, and whether another would do better. */
export function LearningScreen(props: LearningScreenProps) {
  const { first, reviewDecibans, personId, mayManage, maySettle } = props;
  const zone = useZone();
  const [fields, setFields] = useQueryStates({ from: parseAsString, to: parseAsString }, { history: "push" });
  const { unreadable, ...asked } = windowOf(fields, zone);
  const comparison = useComparison(asked, first);
  const approvals = useApprovals(first).data ?? first.approvals;
  const renew = useRenewal();
  const drift = useDrift();
  const influence = useInfluence();
  const signals = useSignals(approvals.items.some(({ subject }) => "signalId" in subject));
  const view = comparison.data ?? first.view;
  const names = new Map([
    ...view.scorers.map(({ id, name }) => [id, name] as const),
    ...(influence.data?.people.map(({ person }) => [person.id, person.name] as const) ?? []),
    ...(signals.data?.own.map(({ signalId, name }) => [signalId, name] as const) ?? []),
  ]);
  return (
    <Page>
      <PageHead
        title="Learning"
        lead="How well the scorer predicts what reviewers find, whether another would do better, and who changes it. It takes two people: one proposes, another decides."
      />
      {comparison.error && (
        <Notice kind="error" title="These figures could not be renewed" className="mb-5">
          <p>{comparison.error.message}</p>
          <Button small className="mt-2" onClick={() => void comparison.refetch()}>
            Try again
          </Button>
        </Notice>
      )}
      <LearningFigures view={view} drift={driftLine(drift.data, drift.isError)} />
      <ApprovalsSection
        approvals={approvals}
        names={names}
        personId={personId}
        maySettle={maySettle}
        onSettled={renew}
      />
      <ScorersSection
        view={view}
        approvals={approvals}
        fields={fields}
        unreadable={unreadable}
        busy={comparison.isPlaceholderData}
        mayManage={mayManage}
        onWindow={(window) => void setFields(window)}
        onDone={renew}
      />
      <CurveSection view={view} />
      <CalibrationSection scorers={view.scorers} />
      <DriftSection query={drift} mayManage={mayManage} onSeen={renew} />
      <PassedSection query={usePassed()} reviewDecibans={reviewDecibans} />
      <InfluenceSection query={influence} personId={personId} mayManage={mayManage} onDone={renew} />
      <ExportSection />
    </Page>
  );
}
