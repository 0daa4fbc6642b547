import { inject } from "vitest";
import { awaitMail, type CaughtMail, readMail } from "./mailbox";

/** What the run's mail catcher received for this address, oldest first. */
export function mailTo(address: string): Promise<CaughtMail[]> {
  return readMail(inject("mailUrl"), address);
}

/** The same, once there are at least so many messages. */
export function waitForMail(address: string, count = 1): Promise<CaughtMail[]> {
  return awaitMail(inject("mailUrl"), address, count);
}
