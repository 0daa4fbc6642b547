import { shortNoticeMail } from "./short-notice";
import type { RenderedMail } from "./weekly-summary";

export type ApprovalWantedProps = {
  proposer: string;
  reason: string;
  /** How many terms differ from the version in force. */
  changes: number;
  appUrl: string;
};

/** Tells somebody who may approve a policy that a proposal waits for a second person. */
export function approvalWantedMail(props: ApprovalWantedProps): Promise<RenderedMail> {
  const { proposer, reason, changes, appUrl } = props;
  const terms = changes === 1 ? "one term" : `${changes} terms`;
  return shortNoticeMail({
    title: "A policy change waits for approval",
    says: `${proposer} proposes to change ${terms} of the policy. Nothing changes until somebody else approves it.`,
    lines: [{ words: `Reason: ${reason}` }],
    link: { words: "See what would change", url: `${appUrl}/policy` },
  });
}
