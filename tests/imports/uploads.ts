import { gzipSync } from "node:zlib";
import type { Context } from "@/lib/context";
import { showImport } from "@/lib/imports/read";
import type { ImportDetail } from "@/lib/imports/schema";
import { uploadImport } from "@/lib/imports/upload";

export const HEADER =
  "externalId,occurredAt,amount,currency,channel,accountId,counterpartyId,counterpartyName,attributes.basket";

/** A sound row; days before the world's start, a few accounts, a few shops. */
export function row(
  index: number,
  changes: Partial<Record<"id" | "amount" | "name" | "account", string>> = {},
) {
  const occurredAt = new Date(Date.UTC(2026, 1, 20) + index * 61_000).toISOString();
  const { id = `P-${index}`, amount = `${10 + (index % 90)}.00`, name = "Corner shop" } = changes;
  const { account = `ACC-${index % 50}` } = changes;
  return `${id},${occurredAt},${amount},EUR,card_remote,${account},SHOP-${index % 7},${name},${index % 5}`;
}

export const rows = (count: number) => Array.from({ length: count }, (_, index) => row(index));
export const csv = (lines: readonly string[]) => Buffer.from(`${[HEADER, ...lines].join("\r\n")}\r\n`);
export const gzip = (content: Buffer) => gzipSync(content);

type Form = { source?: string; mapping?: string; fileName?: string; key?: string };

/** The request that a browser makes of such a form. */
export function uploadRequest(
  content: Buffer,
  { source, mapping, fileName = "payments.csv", key }: Form = {},
) {
  const form = new FormData();
  if (source !== undefined) form.set("source", source);
  if (mapping !== undefined) form.set("mapping", mapping);
  form.set("file", new File([new Uint8Array(content)], fileName));
  const headers: HeadersInit = key === undefined ? {} : { "Idempotency-Key": key };
  return new Request("http://cupel.test/api/imports", { method: "POST", body: form, headers });
}

export const upload = (ctx: Context, content: Buffer, form: Form = {}) =>
  uploadImport(ctx, {}, uploadRequest(content, form));

/** As the page shows it. */
export const shown = (ctx: Context, id: string): Promise<ImportDetail> => showImport(ctx, { id });
