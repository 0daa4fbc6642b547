import { z } from "zod";

const Addresses = z.array(z.object({ address: z.string(), name: z.string().optional() }));
const CaughtMail = z.object({
  id: z.string(),
  from: Addresses,
  to: Addresses,
  subject: z.string(),
  text: z.string().default(""),
  html: z.string().default(""),
  headers: z.record(z.string(), z.unknown()),
  envelope: z.object({ to: z.array(z.object({ address: z.string() })) }),
});
export type CaughtMail = z.infer<typeof CaughtMail>;

const pollMs = 50;

/** Everything the catcher received for this address, oldest first. */
export async function readMail(catcherUrl: string, address: string): Promise<CaughtMail[]> {
  const response = await fetch(new URL("/api/email", catcherUrl));
  if (!response.ok) throw new Error(`The mail catcher answered ${response.status}`);
  const all = z.array(CaughtMail).parse(await response.json());
  return all.filter((mail) =>
    mail.envelope.to.some((to) => to.address.toLowerCase() === address.toLowerCase()),
  );
}

/** Waits until the address has at least so many messages; for senders that work in the background. */
export async function awaitMail(catcherUrl: string, address: string, count = 1): Promise<CaughtMail[]> {
  const deadline = Date.now() + 60_000;
  for (;;) {
    const mails = await readMail(catcherUrl, address);
    if (mails.length >= count) return mails;
    if (Date.now() > deadline) {
      throw new Error(`${address} got ${mails.length} messages, not ${count}, within a minute`);
    }
    await new Promise((resolve) => setTimeout(resolve, pollMs));
  }
}
