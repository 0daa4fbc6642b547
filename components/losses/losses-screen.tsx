import type { WeeksAround } from "@/lib/losses/losses";
import type { WeekView } from "@/lib/losses/schema";
import type { RecipientsView, SummariesView } from "@/lib/losses/summary-schema";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Page, PageHead, Section } from "../ui/section";
import { Cautions } from "./cautions";
import { LargestTable } from "./largest-table";
import { RecipientsSection } from "./recipients-section";
import { SummariesSection } from "./summaries-section";
import { TypologyTable } from "./typology-table";
import { WeekFigures } from "./week-figures";
import { WeekPicker } from "./week-picker";
import { WeekTable } from "./week-table";
import { WorkloadFigures } from "./workload-figures";

type LossesScreenProps = {
  view: WeekView;
  weeks: WeeksAround;
  badWeek: boolean;
  mail: { summaries: SummariesView; recipients: RecipientsView } | null;
  mayManage: boolean;
};

/** What fraud cost in one week and what the team's work saved, and who is told of it every week. */
export function LossesScreen({ view, weeks, badWeek, mail, mayManage }: LossesScreenProps) {
  return (
    <Page>
      <PageHead
        title={weekWords(view.week)}
        lead={
          view.by === "transaction"
            ? `Payments of the week, with what has been found about them so far. Weeks part on Monday 00:00 by the clock of ${view.timeZone}.`
            : `What was booked in the week, whenever the payment was. Weeks part on Monday 00:00 by the clock of ${view.timeZone}.`
        }
      />
      <WeekPicker week={view.week} by={view.by} weeks={weeks} />
      {badWeek && (
        <Notice kind="error" title="That is not an ISO week" className="mb-5">
          Weeks are written like 2026-W48. Shown instead is the last complete week.
        </Notice>
      )}
      <Cautions view={view} />
      <WeekFigures view={view} />
      <Section title="Amounts" lead="Against the week before, taken as it was known at the same age.">
        <WeekTable view={view} />
      </Section>
      <Section title="Workload" lead="What came in, what was done, and what was left at the end of the week.">
        <WorkloadFigures workload={view.workload} />
      </Section>
      <Section title="Largest fraudulent payments">
        {view.largest.length === 0 ? (
          <EmptyState title="No payment of this week has been found fraudulent" />
        ) : (
          <LargestTable view={view} />
        )}
      </Section>
      {view.typologies.length > 0 && (
        <Section title="By typology">
          <TypologyTable view={view} />
        </Section>
      )}
      {mail && <RecipientsSection recipients={mail.recipients} mayManage={mayManage} />}
      {mail && <SummariesSection view={mail.summaries} week={view.week} mayManage={mayManage} />}
    </Page>
  );
}

function weekWords(week: string): string {
  const [year, number] = week.split("-W");
  return `Losses in week ${Number(number)} of ${year}`;
}
