import { shortNoticeMail } from "./short-notice";
import type { RenderedMail } from "./weekly-summary";

export type AssignedCase = { caseId: string; number: number; dueAt: Date };

export type CasesAssignedProps = {
  /** The first of them, the most urgent before the others. */
  cases: readonly AssignedCase[];
  /** How many there are in all. */
  total: number;
  /** The reader's own. */
  timeZone: string;
  appUrl: string;
};

/** Tells somebody which cases a supervisor has given them. Numbers and times only: a mailbox is no place for more. */
export function casesAssignedMail({
  cases,
  total,
  timeZone,
  appUrl,
}: CasesAssignedProps): Promise<RenderedMail> {
  const time = new Intl.DateTimeFormat("en-GB", { dateStyle: "long", timeStyle: "short", timeZone });
  const others = total - cases.length;
  return shortNoticeMail({
    title: total === 1 ? "A case is assigned to you" : `${total} cases are assigned to you`,
    says: `A supervisor has given you ${total === 1 ? "this case" : "these cases"}. Times are by the clock of ${timeZone}.`,
    lines: [
      ...cases.map(({ caseId, number, dueAt }) => ({
        words: `Case ${number}, due ${time.format(dueAt)}`,
        url: `${appUrl}/cases/${caseId}`,
      })),
      ...(others > 0 ? [{ words: others === 1 ? "and one other" : `and ${others} others` }] : []),
    ],
    link: { words: "All that are assigned to you", url: `${appUrl}/cases?assignee=me` },
  });
}
