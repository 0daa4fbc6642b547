import type { ReactNode } from "react";
import type { ApprovalView } from "@/lib/approvals/schema";
import { Time } from "../ui/time";

/** What the subjects of approvals are called, by their id. */
export type SubjectNames = ReadonlyMap<string, string>;

/** What is wished for, in one line. */
export function approvalTitle({ kind, subject }: ApprovalView, names: SubjectNames): ReactNode {
  if ("scorerId" in subject)
    return <>Put {quoted(names.get(subject.scorerId), "a scorer that no longer runs")} in use</>;
  if ("signalId" in subject) {
    const name = quoted(names.get(subject.signalId), "one of the team's own");
    return kind === "signal.switch_on" ? <>Switch on the signal {name}</> : <>Switch off the signal {name}</>;
  }
  return (
    <>
      Take out the labels of {names.get(subject.personId) ?? "a person"}
      {subject.from && (
        <>
          {" "}
          from <Time at={subject.from} />
        </>
      )}
      {subject.to && (
        <>
          {" "}
          until <Time at={subject.to} />
        </>
      )}
    </>
  );
}

/** What an approval does at once. */
export const APPROVAL_DOES: Readonly<Record<ApprovalView["kind"], string>> = {
  "scorer.promote":
    "It gives the scores from then on, and the review line is taken anew for it. The scorer it replaces runs on beside it.",
  "signal.switch_on":
    "The label log is run again as if the signal had always been there; waiting cases are ranked anew.",
  "signal.switch_off": "The label log is run again without the signal; waiting cases are ranked anew.",
  "labels.remove":
    "The label log is run again without them; waiting cases are ranked anew. Decisions, and what was lived, stay as they were.",
};

const quoted = (name: string | undefined, otherwise: string) =>
  name === undefined ? otherwise : `“${name}”`;
