import { z } from "zod";
import type { EndpointTable } from "../endpoint";
import { ExemptFieldsView, TransactionsInput, TransactionsView } from "./schema";

export const transactionEndpoints = {
  "POST /api/transactions": {
    summary:
      "Takes 1 to 1000 payments in; answers one result for each, in order, and a bad one costs no other",
    may: "intake.send",
    input: TransactionsInput,
    output: TransactionsView,
  },
  "GET /api/transactions/exempt-fields": {
    summary: "Identifier fields, by source, that may hold what looks like a card number",
    may: "intake.read",
    input: z.strictObject({}),
    output: ExemptFieldsView,
  },
  "PUT /api/transactions/exempt-fields": {
    summary: "Sets those fields anew",
    may: "keys.manage",
    input: ExemptFieldsView,
    output: ExemptFieldsView,
  },
} as const satisfies EndpointTable;
