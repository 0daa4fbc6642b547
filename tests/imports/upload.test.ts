import { describe, expect, test } from "vitest";
import { importChunks, imports } from "@/db/schema/transactions";
import { abandonSilentUploads } from "@/lib/imports/abandon";
import { claimImport } from "@/lib/imports/lease";
import { listImports } from "@/lib/imports/read";
import { ImportsInput, type ImportView } from "@/lib/imports/schema";
import { uploadImport, uploadUpTo } from "@/lib/imports/upload";
import { ReplayedAnswer } from "@/lib/write-once";
import { testWorld, WORLD_START } from "../support/world";
import { csv, rows, shown, upload, uploadRequest } from "./uploads";

const world = await testWorld();
const { db } = world;
const supervisor = world.ctx(await world.person("supervisor"));

const kept = async () => ({
  imports: (await db.select().from(imports)).length,
  chunks: (await db.select().from(importChunks)).length,
});

const BOUNDARY = "cut-here";
type Part = { name: string; value: string; fileName?: string };

/** A form written by hand, so that it can be wrong; null cuts the transfer off. */
function written(parts: (Part | null)[], ending = `--${BOUNDARY}--\r\n`): Request {
  const cutAt = parts.indexOf(null);
  const text = parts
    .slice(0, cutAt < 0 ? undefined : cutAt)
    .map((part) => {
      const { name, value, fileName } = part as Part;
      const file = fileName === undefined ? "" : `; filename="${fileName}"\r\nContent-Type: text/csv`;
      return `--${BOUNDARY}\r\nContent-Disposition: form-data; name="${name}"${file}\r\n\r\n${value}`;
    })
    .join("\r\n");
  return posted(cutAt < 0 ? `${text}\r\n${ending}` : text);
}

function posted(
  body: string | ReadableStream<Uint8Array>,
  contentType = `multipart/form-data; boundary=${BOUNDARY}`,
) {
  const init = { method: "POST", body, headers: { "Content-Type": contentType }, duplex: "half" };
  return new Request("http://cupel.test/api/imports", init);
}

const FILE: Part = { name: "file", value: csv(rows(3)).toString(), fileName: "a.csv" };

test("an upload answers at once, queued, and says who sent what", async () => {
  const content = csv(rows(10));
  const view = await upload(supervisor, content, { source: "core", fileName: "C:\\data\\march.csv" });
  expect(view).toMatchObject({
    state: "queued",
    fileName: "march.csv",
    source: "core",
    sizeBytes: content.byteLength,
    readBytes: 0,
    rowsDone: 0,
  });
  expect(view.by).toBe(supervisor.actor.kind === "person" ? supervisor.actor.name : "");
});

test("a large file is kept in pieces that come together again", async () => {
  const pieces = Array.from({ length: 50 }, (_, index) => `${index},`.repeat(20_000));
  const { id, sizeBytes } = await uploadImport(
    supervisor,
    {},
    posted(streamOf([headOf(FILE), ...pieces, `\r\n--${BOUNDARY}--\r\n`])),
  );
  const chunks = (await db.select().from(importChunks)).filter((chunk) => chunk.importId === id);
  expect(chunks.length).toBeGreaterThanOrEqual(2);
  const together = Buffer.concat(chunks.sort((a, b) => a.part - b.part).map(({ content }) => content));
  expect(together.equals(Buffer.from(pieces.join("")))).toBe(true);
  expect(sizeBytes).toBe(together.byteLength);
});

const source = (value: string): Part => ({ name: "source", value });
const mapping = (value: string): Part => ({ name: "mapping", value });

test.each([
  ["no file", [source("core")], "file", "is missing"],
  ["an empty file", [{ ...FILE, value: "" }], "file", "is empty"],
  ["two files", [FILE, { ...FILE, name: "file" }], "file", "must be one file"],
  ["the file under another name", [{ ...FILE, name: "upload" }], "upload", /file stands under file/],
  ["a mapping that is no JSON", [mapping("{amount"), FILE], "mapping", "is not JSON"],
  ["a mapping that is no object", [mapping("[1]"), FILE], "mapping", /expected record/i],
  ["a mapping to no field", [mapping('{"A":"colour"}'), FILE], "mapping", /neither a field/],
  ["a card number as a header", [mapping('{"4111111111111111":null}'), FILE], "mapping", /card number/],
  [
    "a card number as the file's name",
    [{ ...FILE, fileName: "4111-1111-1111-1111.csv" }],
    "file",
    /card number/,
  ],
  ["a mapping of more than 64 KB", [mapping("x".repeat(70_000)), FILE], "mapping", /64 KB/],
  ["a source with a space", [source("core banking"), FILE], "source", /letters, digits/],
  ["an unknown field", [{ name: "colour", value: "red" }, FILE], "colour", "is not a known field"],
  ["a field behind the file", [FILE, source("core")], "source", "must stand before the file"],
  [
    "a field behind a file of several pieces",
    [{ ...FILE, value: "x".repeat(3_000_000) }, source("core")],
    "source",
    /before/,
  ],
] as const)("a form with %s is refused by name and leaves nothing", async (_, parts, path, message) => {
  const before = await kept();
  const request = written([...parts]);
  await expect(uploadImport(supervisor, {}, request)).rejects.toMatchObject({
    code: "invalid",
    errors: [{ path, message: typeof message === "string" ? message : expect.stringMatching(message) }],
  });
  expect(await kept()).toEqual(before);
});

test.each([
  ["JSON", "application/json"],
  ["a form without a boundary", "multipart/form-data"],
])("%s is refused as another media type", async (_, contentType) => {
  const before = await kept();
  await expect(uploadImport(supervisor, {}, posted("{}", contentType))).rejects.toMatchObject({
    code: "unsupported_media",
  });
  expect(await kept()).toEqual(before);
});

test("a file over the limit is refused and leaves nothing", async () => {
  const before = await kept();
  const request = () => uploadRequest(Buffer.alloc(2 * 1024 ** 2 + 1, "a"), {});
  await expect(uploadUpTo(2 * 1024 ** 2, supervisor, request())).rejects.toMatchObject({ code: "too_large" });
  expect(await kept()).toEqual(before);
  await uploadUpTo(2 * 1024 ** 2 + 1, supervisor, request());
});

const cut = {
  "a form that ends within its file": () => written([source("core"), FILE, null]),
  "a connection that breaks within the file": () =>
    broken([headOf(FILE), ...Array<string>(50).fill("a,b\r\n".repeat(12_000))]),
  "a sender that goes away between two pieces": () =>
    broken([headOf(FILE), "externalId,amount\r\n", "X,1.0"]),
};

test.each(Object.entries(cut))(
  "%s leaves an import that says so, and none of its content",
  async (_, make) => {
    const before = await kept();
    await expect(uploadImport(supervisor, {}, make())).rejects.toMatchObject({
      code: "invalid",
      errors: [{ path: "file", message: "did not come in whole" }],
    });
    const after = await kept();
    expect(after).toEqual({ imports: before.imports + 1, chunks: before.chunks });
    const [newest] = (await listImports(supervisor, ImportsInput.parse({}))).items;
    expect(newest).toMatchObject({
      state: "failed",
      fileName: "a.csv",
      problem: "The file did not come in whole",
    });
  },
);

const headOf = ({ name, fileName }: Part) =>
  `--${BOUNDARY}\r\nContent-Disposition: form-data; name="${name}"; filename="${fileName}"\r\n\r\n`;

const broken = (pieces: string[]) => posted(streamOf(pieces, new Error("aborted")));

function streamOf(pieces: string[], error?: Error): ReadableStream<Uint8Array> {
  const bytes = pieces.map((piece) => new TextEncoder().encode(piece));
  return new ReadableStream({
    pull(controller) {
      const next = bytes.shift();
      if (next) controller.enqueue(next);
      else if (error) controller.error(error);
      else controller.close();
    },
  });
}

test("a transfer that broke off before its file leaves nothing at all", async () => {
  const before = await kept();
  await expect(uploadImport(supervisor, {}, written([source("core"), null]))).rejects.toMatchObject({
    code: "invalid",
  });
  expect(await kept()).toEqual(before);
});

test("a transfer whose server is gone is given up after five silent minutes, and not before", async () => {
  const { id } = await upload(supervisor, csv(rows(2)));
  const leaseExpiresAt = new Date(WORLD_START.getTime() + 5 * 60_000);
  await db.update(imports).set({ state: "receiving", leaseExpiresAt });
  await abandonSilentUploads(db, leaseExpiresAt);
  expect(await shown(supervisor, id)).toMatchObject({ state: "receiving" });
  expect(await claimImport(db, leaseExpiresAt)).toBeNull();
  await abandonSilentUploads(db, new Date(leaseExpiresAt.getTime() + 1));
  expect(await shown(supervisor, id)).toMatchObject({ state: "failed" });
  expect((await kept()).chunks).toBe(0);
});

test("supervisors upload; administrators and auditors read; nobody else does either", async () => {
  for (const role of ["administrator", "auditor"] as const) {
    const ctx = world.ctx(await world.person(role));
    await expect(upload(ctx, csv(rows(1)))).rejects.toMatchObject({ code: "forbidden" });
    expect((await listImports(ctx, ImportsInput.parse({}))).items.length).toBeGreaterThan(0);
  }
  for (const role of ["reviewer", "risk_manager"] as const) {
    const ctx = world.ctx(await world.person(role));
    await expect(upload(ctx, csv(rows(1)))).rejects.toMatchObject({ code: "forbidden" });
    await expect(listImports(ctx, ImportsInput.parse({}))).rejects.toMatchObject({ code: "forbidden" });
  }
});

test("the list is paged, newest first, and searched by state and file name", async () => {
  for (const fileName of ["100%_a.csv", "Week 9.csv", "week 10.csv"]) {
    await upload(supervisor, csv(rows(1)), { fileName });
  }
  const names = async (filters: Record<string, unknown>) =>
    (await listImports(supervisor, ImportsInput.parse(filters))).items.map((item) => item.fileName);
  expect((await names({})).slice(0, 3)).toEqual(["week 10.csv", "Week 9.csv", "100%_a.csv"]);
  expect(await names({ search: "WEEK" })).toEqual(["week 10.csv", "Week 9.csv"]);
  expect(await names({ search: "%_" })).toEqual(["100%_a.csv"]);
  expect(await names({ search: "week", state: "failed" })).toEqual([]);
  const first = await listImports(supervisor, ImportsInput.parse({ search: "week", limit: 1 }));
  expect(first.items.map((item) => item.fileName)).toEqual(["week 10.csv"]);
  const second = { search: "week", limit: 1, cursor: first.next ?? undefined };
  expect(await listImports(supervisor, ImportsInput.parse(second))).toMatchObject({
    items: [{ fileName: "Week 9.csv" }],
    next: null,
  });
});

describe("with an Idempotency-Key", () => {
  /** The answer of an upload, or the one that the door gives in its place. */
  const answerTo = (content: Buffer, form: Parameters<typeof upload>[2]) =>
    upload(supervisor, content, form).catch((error: unknown) => {
      if (error instanceof ReplayedAnswer) return error.answer as ImportView;
      throw error;
    });

  test("the same file again is the same import, also when both come at once", async () => {
    const content = csv(rows(12));
    const first = await answerTo(content, { key: "k-1" });
    const before = await kept();
    expect(await answerTo(content, { key: "k-1" })).toEqual(first);
    expect(await kept()).toEqual(before);
    const both = await Promise.all([answerTo(content, { key: "k-2" }), answerTo(content, { key: "k-2" })]);
    expect(both[0]).toEqual(both[1]);
    expect(both[0].id).not.toBe(first.id);
    expect(await kept()).toEqual({ imports: before.imports + 1, chunks: before.chunks + 1 });
  });

  test.each([
    ["another file", csv(rows(13)), {}],
    ["another name", csv(rows(14)), { fileName: "other.csv" }],
    ["another source", csv(rows(14)), { source: "other" }],
    ["another mapping", csv(rows(14)), { mapping: '{"amount":null}' }],
  ])("%s under the same key is refused, and leaves nothing", async (what, content, form) => {
    const key = what.replace(" ", "-");
    await answerTo(csv(rows(14)), { key });
    const before = await kept();
    await expect(upload(supervisor, content, { ...form, key })).rejects.toMatchObject({
      status: 422,
      errors: [{ path: "Idempotency-Key" }],
    });
    expect(await kept()).toEqual(before);
  });

  test("a key of one person is none of another's, and an unusable one is named", async () => {
    const content = csv(rows(15));
    const first = await answerTo(content, { key: "k-3" });
    const other = world.ctx(await world.person("supervisor"));
    expect((await upload(other, content, { key: "k-3" })).id).not.toBe(first.id);
    await expect(upload(supervisor, content, { key: "x".repeat(129) })).rejects.toMatchObject({
      errors: [{ path: "Idempotency-Key" }],
    });
  });
});
