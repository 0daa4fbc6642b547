import { z } from "zod";
import type { EndpointTable } from "../endpoint";
import { MailInput, MailStateView } from "../mail/schema";
import { LossesInput, WeekView } from "./schema";
import {
  RecipientInput,
  RecipientRef,
  RecipientsView,
  RecipientView,
  SendNowView,
  SummariesInput,
  SummariesView,
  SummaryContentView,
  SummaryInput,
  UnsubscribeInput,
  WeekInput,
} from "./summary-schema";

export const lossEndpoints = {
  "GET /api/losses": {
    summary: "Every figure of one ISO week: losses, costs, workload, largest cases, typologies",
    may: "losses.read",
    input: LossesInput,
    output: WeekView,
  },
  "GET /api/summaries": {
    summary: "Weekly summaries as queued and sent, newest first",
    may: "mail.read",
    input: SummariesInput,
    output: SummariesView,
  },
  "GET /api/summaries/{id}": {
    summary: "One summary as it was sent",
    may: "mail.read",
    input: SummaryInput,
    output: SummaryContentView,
  },
  "GET /api/summaries/preview": {
    summary: "The summary of a week as it would be sent now",
    may: "losses.read",
    input: WeekInput,
    output: SummaryContentView,
  },
  "POST /api/summaries/send-now": {
    summary: "Queues a week's summary for every recipient who has not been sent it",
    may: "summary.manage",
    input: WeekInput,
    output: SendNowView,
  },
  "POST /api/summaries/{id}/send-again": {
    summary: "Sends a summary again that failed, or whose arrival is uncertain",
    may: "summary.manage",
    input: MailInput,
    output: MailStateView,
  },
  "POST /api/summaries/{id}/mark-as-sent": {
    summary: "Says that an uncertain summary did arrive",
    may: "summary.manage",
    input: MailInput,
    output: MailStateView,
  },
  "GET /api/summaries/recipients": {
    summary: "Who gets the weekly summary, and who else could",
    may: "mail.read",
    input: z.strictObject({}),
    output: RecipientsView,
  },
  "PUT /api/summaries/recipients/{personId}": {
    summary: "Puts a person on the list, or changes their weekday and hour",
    may: "summary.manage",
    input: RecipientInput,
    output: RecipientView,
  },
  "DELETE /api/summaries/recipients/{personId}": {
    summary: "Takes a person off the list",
    may: "summary.manage",
    input: RecipientRef,
    output: null,
    status: 204,
  },
  "GET /api/unsubscribe/{token}": {
    summary: "Leads to the page that ends the weekly summaries; changes nothing by itself",
    may: "anyone",
    input: UnsubscribeInput,
    output: null,
    produces: "text/html",
  },
  "POST /api/unsubscribe/{token}": {
    summary: "Ends the weekly summaries of whoever the secret was sent to (RFC 8058)",
    may: "anyone",
    input: UnsubscribeInput,
    output: null,
    status: 204,
    body: "raw",
  },
} as const satisfies EndpointTable;
