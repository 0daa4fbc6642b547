/** Acts of the trail as people read them. An act not listed here reads as its code, in plain words. */
const ACT_WORDS: Readonly<Record<string, string>> = {
  "case.opened": "Case opened",
  "case.claimed": "Taken in hand",
  "case.handed_out": "Handed out",
  "case.released": "Put back",
  "case.lease_expired": "Claim ran out",
  "case.assigned": "Assigned",
  "case.freed": "Freed, as its reviewer may no longer decide it",
  "case.escalated": "Escalated",
  "case.set_aside": "Set aside",
  "case.came_back": "Came back",
  "case.noted": "Note written",
  "case.decided": "Decided",
  "case.lapsed": "Lapsed, undecided",
  "decision.undone": "Decision taken back",
  "decision.corrected": "Decision corrected",
  "person.signed_in": "Signed in",
  "person.signed_out": "Signed out",
  "person.sign_in_refused": "Sign-in refused",
  "person.told_of_cases": "Told by e-mail of cases given to them",
  "person.locked": "Account locked",
  "access.refused": "Access refused",
  "person.password_change_refused": "Password change refused",
  "key.added": "Key made",
  "scorer.drift_warned": "Warning of drift",
  "scorer.drift_seen": "Warning of drift seen",
  "approval.proposed": "Proposed to a second person",
  "approval.approved": "Approved by a second person",
  "approval.refused": "Refused by a second person",
  "approval.withdrawn": "Proposal withdrawn",
  "scorer.candidate_added": "Candidate added",
  "scorer.dropped": "Candidate dropped",
  "scorer.promoted": "Candidate put in use",
  "scorer.demoted": "Scorer taken out of use",
  "scorer.rebased": "Scorer run anew from another base rate",
  "signal.drafted": "Own signal defined",
  "signal.changed": "Own signal changed",
  "signal.archived": "Own signal put away",
  "signal.switched_on": "Own signal switched on",
  "signal.switched_off": "Own signal switched off",
  "trail.read": "Trail read",
  "trail.verified": "Chain verified",
  "transaction.received": "Payment received",
  "transaction.scored": "Payment scored",
};

export function actWords(act: string): string {
  const words = ACT_WORDS[act];
  if (words) return words;
  const plain = act.replace(/[._]/g, " ");
  return plain.charAt(0).toUpperCase() + plain.slice(1);
}
