import type { CaughtMail } from "../support/mailbox";

/** The message as it came over the wire, for headers that the catcher shows in a form of its own. */
export async function sourceOf(catcherUrl: string, mail: CaughtMail): Promise<string> {
  const response = await fetch(new URL(`/api/email/${mail.id}/source`, catcherUrl));
  if (!response.ok) throw new Error(`The mail catcher answered ${response.status}`);
  return response.text();
}
