import { z } from "zod";
import { Id, Instant } from "../cases/schema";
import { IMPORT_STATES } from "../transactions/codes";
import { isImportField } from "./fields";

/** Header in the file → field of a transaction, or `attributes.<name>`; null leaves the column out. */
export const ColumnMapping = z.record(
  z.string().max(200, "has a header of more than 200 characters"),
  z
    .string()
    .refine(isImportField, "names something that is neither a field of a payment nor attributes.<name>")
    .nullable(),
);
export type ColumnMapping = z.infer<typeof ColumnMapping>;

/** The fields of the form, which come before the file. */
export const UploadFields = z.strictObject({
  source: z
    .string()
    .regex(/^[\w.-]{1,64}$/, "needs 1 to 64 letters, digits, dots, hyphens or underscores")
    .default("csv"),
  mapping: ColumnMapping.default({}),
});

export const ImportView = z.strictObject({
  id: Id,
  fileName: z.string(),
  source: z.string(),
  state: z.enum(IMPORT_STATES),
  by: z.string().nullable(),
  createdAt: Instant,
  finishedAt: Instant.nullable(),
  sizeBytes: z.int(),
  readBytes: z.int(),
  rowsDone: z.int(),
  created: z.int(),
  duplicates: z.int(),
  rejected: z.int(),
  casesOpened: z.int(),
  /** Why it stopped before its end; what is counted above is in all the same. */
  problem: z.string().nullable(),
});
export type ImportView = z.infer<typeof ImportView>;

const ImportError = z.strictObject({
  row: z.int(),
  externalId: z.string().nullable(),
  path: z.string(),
  message: z.string(),
});

export const ImportDetail = ImportView.extend({
  /** The first of them; the download has all. */
  errors: z.array(ImportError),
});
export type ImportDetail = z.infer<typeof ImportDetail>;

export const ImportsView = z.strictObject({ items: z.array(ImportView), next: z.string().nullable() });
export type ImportsView = z.infer<typeof ImportsView>;

export const ImportInput = z.strictObject({ id: Id });
export const ImportsInput = z.strictObject({
  cursor: Id.optional(),
  state: z.enum(IMPORT_STATES).optional(),
  /** Part of a file's name. */
  search: z.string().trim().max(255).optional(),
  limit: z.coerce.number().int().min(1).max(100).default(50),
});
export type ImportsInput = z.infer<typeof ImportsInput>;
export type UploadFields = z.infer<typeof UploadFields>;
export type ImportInput = z.infer<typeof ImportInput>;
