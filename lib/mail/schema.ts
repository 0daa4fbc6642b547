import { z } from "zod";
import { MAIL_STATES } from "./codes";

export const MailInput = z.strictObject({ id: z.uuid() });
export type MailInput = z.infer<typeof MailInput>;

export const MailStateView = z.strictObject({ id: z.uuid(), state: z.enum(MAIL_STATES) });
export type MailStateView = z.infer<typeof MailStateView>;
