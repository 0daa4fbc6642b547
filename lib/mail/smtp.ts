import "server-only";
import { Readable } from "node:stream";
import type { NodemailerError } from "nodemailer";
import MailComposer from "nodemailer/lib/mail-composer";
import { parseConnectionUrl } from "nodemailer/lib/shared";
import SMTPConnection from "nodemailer/lib/smtp-connection";
import type { Attempt } from "./rules";
import type { MailSettings } from "./settings";

export type Envelope = {
  recipient: string;
  subject: string;
  html: string;
  text: string;
  headers: Record<string, string>;
  messageId: string;
  createdAt: Date;
};

const WAITS = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 60_000 };

/**
 * Hands one message to the mail server and tells what is known of it. The session is driven step by step, because
 * only so can a loss before the message was handed over be told from one after.
 */
export async function sendBySmtp(
  settings: MailSettings,
  mail: Envelope,
  waits: Partial<typeof WAITS> = {},
): Promise<Attempt> {
  const content = await compose(settings, mail);
  const { auth, ...where } = parseConnectionUrl(settings.smtpUrl);
  const connection = new SMTPConnection({ ...where, ...WAITS, ...waits });
  const message = new TakenStream(content);
  try {
    await untilDone(connection, (done) => connection.connect(done));
    if (auth && connection.allowsAuth) {
      const credentials = { user: auth.user, pass: auth.pass };
      await untilDone(connection, (done) => connection.login({ credentials }, done));
    }
    const envelope = { from: settings.from, to: [mail.recipient], size: content.byteLength };
    await untilDone(connection, (done) => connection.send(envelope, message, done));
    connection.quit();
    return { result: "accepted" };
  } catch (error) {
    connection.close();
    return attemptOf(error, message.isTaken);
  }
}

/** The bytes of the message, and whether the session has begun to take them: it does so after the server's go-ahead. */
class TakenStream extends Readable {
  isTaken = false;
  constructor(private readonly content: Buffer) {
    super();
  }
  override _read(): void {
    this.isTaken = true;
    this.push(this.content);
    this.push(null);
  }
}

function compose(settings: MailSettings, mail: Envelope): Promise<Buffer> {
  const { recipient, createdAt, ...rest } = mail;
  const from = { name: "Cupel", address: settings.from };
  return new MailComposer({ ...rest, from, to: recipient, date: createdAt }).compile().build();
}

/** A step ends with its callback or with the connection's error, whichever comes first. */
function untilDone(
  connection: SMTPConnection,
  step: (done: (error?: Error | null) => void) => void,
): Promise<void> {
  return new Promise((resolve, reject) => {
    connection.once("error", reject);
    step((error) => {
      connection.off("error", reject);
      // An error may still follow the one that is reported; nobody else listens for it.
      connection.on("error", () => {});
      if (error) reject(error);
      else resolve();
    });
  });
}

/** Steps whose refusal is about this message; a refused sign-in or greeting is about the server and passes. */
const ABOUT_THE_MESSAGE = ["MAIL FROM", "RCPT TO", "DATA"];

function attemptOf(error: unknown, isTaken: boolean): Attempt {
  const { responseCode = null, command = "", permanent } = error as NodemailerError;
  const problem = problemOf(error);
  if (responseCode === null && isTaken) return { result: "unknown", problem };
  return { result: "refused", permanent: permanent === true && ABOUT_THE_MESSAGE.includes(command), problem };
}

/** Replies of mail servers repeat addresses, which belong in the recipient's column alone. */
function problemOf(error: unknown): string {
  const text = error instanceof Error ? error.message : "The mail server could not be reached";
  return text
    .replace(/\S+@\S+/g, "(address)")
    .replace(/\s+/g, " ")
    .slice(0, 400);
}
