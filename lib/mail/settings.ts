import "server-only";
import { environment } from "../env";

export type MailSettings = {
  smtpUrl: string;
  /** Address that messages come from. */
  from: string;
  /** Where links in messages lead; its host also ends the Message-ID. */
  appUrl: string;
};

export function mailSettings(): MailSettings {
  const { SMTP_URL, MAIL_FROM, APP_URL } = environment();
  return {
    smtpUrl: SMTP_URL,
    from: MAIL_FROM ?? `cupel@${new URL(APP_URL).hostname}`,
    appUrl: APP_URL.replace(/\/$/, ""),
  };
}
