import { z } from "zod";
import type { EndpointTable } from "../endpoint";
import { ImportDetail, ImportInput, ImportsInput, ImportsView, ImportView } from "./schema";

export const importEndpoints = {
  "POST /api/imports": {
    summary:
      "Takes a CSV file in (multipart: source and mapping, then file) and answers at once; it is read in the background",
    may: "intake.upload",
    input: z.strictObject({}),
    output: ImportView,
    status: 202,
    body: "raw",
    keyed: true,
  },
  "GET /api/imports": {
    summary: "Imports, the newest first",
    may: "intake.read",
    input: ImportsInput,
    output: ImportsView,
  },
  "GET /api/imports/{id}": {
    summary: "Progress, counts and the first row errors of an import",
    may: "intake.read",
    input: ImportInput,
    output: ImportDetail,
  },
  "GET /api/imports/{id}/errors": {
    summary: "All row errors of an import as CSV",
    may: "intake.read",
    input: ImportInput,
    output: null,
    produces: "text/csv",
  },
} as const satisfies EndpointTable;
