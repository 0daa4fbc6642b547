import { shortNoticeMail } from "./short-notice";
import type { RenderedMail } from "./weekly-summary";

export type SecondPersonWantedProps = {
  proposer: string;
  kind: "scorer.promote" | "signal.switch_on" | "signal.switch_off" | "labels.remove";
  reason: string;
  appUrl: string;
};

const WISHES: Record<SecondPersonWantedProps["kind"], string> = {
  "scorer.promote": "to put a candidate in the place of the scorer in use",
  "signal.switch_on": "to switch on a signal of the team's own",
  "signal.switch_off": "to switch off a signal of the team's own",
  "labels.remove": "to take one person's labels out of the scorer",
};

/** Tells somebody who may approve it that what changes the scorer waits for a second person. */
export function secondPersonWantedMail(props: SecondPersonWantedProps): Promise<RenderedMail> {
  const { proposer, kind, reason, appUrl } = props;
  return shortNoticeMail({
    title: "A change of the scorer waits for approval",
    says: `${proposer} proposes ${WISHES[kind]}. Nothing changes until somebody else approves it.`,
    lines: [{ words: `Reason: ${reason}` }],
    link: { words: "See it on the Learning screen", url: `${appUrl}/learning` },
  });
}
