import { connect } from "node:net";
import { afterAll, beforeAll, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import type { ImportDetail, ImportsView, ImportView } from "@/lib/imports/schema";
import { newId } from "@/lib/new-id";
import { csv, row, rows } from "../imports/uploads";
import { makePerson, TEST_PASSWORD } from "../support/people";
import { CookieJar, signedIn, visit } from "../support/session";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);

let supervisor = new CookieJar();

beforeAll(async () => {
  const { email } = await makePerson(db, ["supervisor"]);
  supervisor = await signedIn(url, email, TEST_PASSWORD);
});

function formOf(content: Buffer, fileName: string, fields: Record<string, string> = {}): FormData {
  const form = new FormData();
  for (const [name, value] of Object.entries(fields)) form.set(name, value);
  form.set("file", new File([new Uint8Array(content)], fileName));
  return form;
}

const send = (body: BodyInit) => visit(url, "/api/imports", supervisor, { method: "POST", body });

async function read<T>(path: string): Promise<T> {
  const response = await visit(url, path, supervisor);
  expect(response.status).toBe(200);
  return (await response.json()) as T;
}

const named = async (fileName: string) =>
  (await read<ImportsView>(`/api/imports?search=${encodeURIComponent(fileName)}`)).items;

test("a file goes in by multipart, is read in the background, and its row errors come as CSV", async () => {
  const lines = [...rows(20), row(20, { amount: "1.555" })];
  const response = await send(formOf(csv(lines), "day.csv", { source: newId(), mapping: "{}" }));
  expect(response.status).toBe(202);
  const { id, state } = (await response.json()) as ImportView;
  expect(["queued", "running", "done"]).toContain(state);
  const detail = () => read<ImportDetail>(`/api/imports/${id}`);
  await expect.poll(async () => (await detail()).state, { timeout: 30_000 }).toBe("done");
  expect(await detail()).toMatchObject({ created: 20, rejected: 1, errors: [{ row: 22, path: "amount" }] });
  const errors = await visit(url, `/api/imports/${id}/errors`, supervisor);
  expect(errors.headers.get("Content-Disposition")).toContain(`row-errors-${id}.csv`);
  expect((await errors.text()).split("\r\n")[1]).toMatch(/^22,P-20,amount,/);
});

test("a file of 24 MB comes in whole", async () => {
  const fileName = `${newId()}.csv`;
  const content = Buffer.alloc(24 * 1024 ** 2 + 5, "no header of ours,");
  const response = await send(formOf(content, fileName));
  expect([response.status, ((await response.json()) as ImportView).sizeBytes]).toEqual([
    202,
    content.byteLength,
  ]);
});

test.each([
  ["a mapping that is no JSON", formOf(csv(rows(1)), "x.csv", { mapping: "{" }), 422, "mapping"],
  ["an unknown field", formOf(csv(rows(1)), "x.csv", { colour: "red" }), 422, "colour"],
  ["no file", formWithout(), 422, "file"],
] as const)("a form with %s gets a problem that names the field", async (_, form, status, path) => {
  const response = await send(form);
  expect(response.headers.get("Content-Type")).toBe("application/problem+json");
  expect(response.status).toBe(status);
  expect(await response.json()).toMatchObject({ status, errors: [{ path }] });
});

function formWithout(): FormData {
  const form = new FormData();
  form.set("source", "core");
  return form;
}

test("a body of another kind gets a problem that says which kind to send", async () => {
  const response = await send("externalId,amount");
  expect(response.status).toBe(415);
  expect(await response.json()).toMatchObject({ detail: "Send the file as multipart/form-data" });
});

test("a transfer that breaks off in the middle leaves nothing but a line that says so", async () => {
  const fileName = `${newId()}.csv`;
  const { hostname, port, host, origin } = new URL(url);
  const head = `--cut\r\nContent-Disposition: form-data; name="file"; filename="${fileName}"\r\n\r\n`;
  const socket = connect(Number(port), hostname);
  socket.write(
    [
      "POST /api/imports HTTP/1.1",
      `Host: ${host}`,
      `Origin: ${origin}`,
      `Cookie: ${supervisor.header}`,
      "Content-Type: multipart/form-data; boundary=cut",
      "Content-Length: 9000000",
      "",
      head,
    ].join("\r\n"),
  );
  socket.write("a,b\r\n".repeat(600_000));
  const states = async () => (await named(fileName)).map(({ state }) => state);
  await expect.poll(states, { timeout: 30_000 }).toEqual(["receiving"]);
  socket.destroy();
  await expect.poll(states, { timeout: 30_000 }).toEqual(["failed"]);
  expect(await named(fileName)).toMatchObject([{ rowsDone: 0, problem: "The file did not come in whole" }]);
});
