import { describe, expect, test } from "vitest";
import { PAGES } from "@/lib/auth/pages";
import type { Endpoint } from "@/lib/endpoint";
import { ENDPOINTS } from "@/lib/endpoints";
import { domainOf, readSources, type Source } from "./sources";

const sources = readSources();
const byFile = new Map(sources.map((source) => [source.file, source]));
const endpoints: [string, Endpoint][] = Object.entries(ENDPOINTS);

/** next-auth speaks a protocol of its own. */
const OUTSIDE_THE_DOOR = ["app/api/auth/[...nextauth]/route.ts"];

const routes = sources.filter(
  ({ file }) => /^app\/.*\/route\.tsx?$/.test(file) && !OUTSIDE_THE_DOOR.includes(file),
);
const pages = sources.filter(({ file }) => /^app\/(.*\/)?page\.tsx$/.test(file));

const METHODS = ["GET", "HEAD", "POST", "PUT", "PATCH", "DELETE"] as const;

/** `app/api/cases/[id]/claim/route.ts` → `/api/cases/{id}/claim` */
const pathOf = (file: string) => `/${file.replace(/^app\//, "").replace(/\/?(route\.tsx?|page\.tsx)$/, "")}`;

type Door = { file: string; method: string; key: string; useCase: string; source: Source };

/** `export const POST = route("POST /api/…", useCase);` */
function doorsOf(source: Source): Door[] {
  const found = source.text.matchAll(/export const (\w+)\s*=\s*route\(\s*"([^"]+)",\s*(\w+)/g);
  return [...found].map(([, method = "", key = "", useCase = ""]) => ({
    file: source.file,
    method,
    key,
    useCase,
    source,
  }));
}

// A stream answers HEAD by itself, or Next would open it: the same door, so it counts once.
const doors = routes.flatMap(doorsOf).filter(({ method }) => method !== "HEAD");

describe("routes", () => {
  test("every exported method goes through the common door", () => {
    const exported = routes.flatMap((source) =>
      METHODS.filter((method) =>
        new RegExp(`export (const|async function|function) ${method}\\b`).test(source.text),
      ).map((method) => `${source.file} ${method}`),
    );
    expect(exported.filter((one) => !one.endsWith(" HEAD")).sort()).toEqual(
      doors.map(({ file, method }) => `${file} ${method}`).sort(),
    );
  });

  test("every door stands where its key says", () => {
    for (const { file, method, key } of doors) {
      expect(`${method} ${pathOf(file).replace(/\[(\w+)\]/g, "{$1}")}`).toBe(key);
    }
  });

  test("every route is in the table of endpoints, and every endpoint has its route", () => {
    expect(doors.map(({ key }) => key).sort()).toEqual(Object.keys(ENDPOINTS).sort());
  });

  test("a route file holds its doors and nothing else", () => {
    for (const { lines, file } of routes) expect(`${file} ${lines.length < 30}`).toBe(`${file} true`);
  });

  test("strangers may read what is open and write nothing but what a mailed secret allows", () => {
    const open = endpoints.flatMap(([key, { may }]) =>
      may === "anyone" && !key.startsWith("GET ") ? key : [],
    );
    expect(open).toEqual(BY_MAILED_SECRET);
  });
});

/** One-click unsubscribing carries no session (RFC 8058): the secret in the address is what it needs. */
const BY_MAILED_SECRET = ["POST /api/unsubscribe/{token}"];

describe("writes", () => {
  /** Use cases without a trail entry or a demand of their own, and why. */
  const ARGUED: Readonly<Record<string, string>> = {
    "PUT /api/cases/{id}/draft": "a half-written note is nobody's act yet",
  };

  const writes = doors.filter(({ method, key }) => method !== "GET" && !(key in ARGUED));

  test.each(writes.map((door) => [door.key, door] as const))(
    "%s asks who may, and writes the trail",
    (key, { source, useCase }) => {
      const file = fileOfImport(source, useCase);
      const reached = sameDomainClosure(file).map((each) => each.text);
      const asks = reached.some((text) => /\bdemand(Person)?\(/.test(text));
      expect(asks || BY_MAILED_SECRET.includes(key)).toBe(true);
      // What is put before a second person is written to the trail by `propose`.
      expect(reached.some((text) => /\b(appendTrail|propose)\(/.test(text))).toBe(true);
    },
  );

  test("every exemption is of an endpoint that exists", () => {
    for (const key of Object.keys(ARGUED)) expect(Object.keys(ENDPOINTS)).toContain(key);
  });
});

function fileOfImport(source: Source, name: string): string {
  const statement = new RegExp(`import \\{[^}]*\\b${name}\\b[^}]*\\} from "([^"]+)"`).exec(source.text);
  const from = source.imports.find((one) => one.from === statement?.[1]);
  if (!from?.file) throw new Error(`${source.file} does not import ${name}`);
  return from.file;
}

/** The file and those of its own domain that it stands on. */
function sameDomainClosure(file: string, seen = new Set<string>()): Source[] {
  const source = byFile.get(file);
  if (!source || seen.has(file)) return [];
  seen.add(file);
  const own = source.imports.filter((one) => one.file && domainOf(one.file) === domainOf(file));
  return [source, ...own.flatMap((one) => sameDomainClosure(one.file ?? "", seen))];
}

describe("pages", () => {
  /** Open to strangers: the way in, and the page behind the secret of a mail, which looks the same to everybody. */
  const OPEN = ["/sign-in", "/unsubscribe/[token]"];

  test("every page is in the list of pages, and every listed page is there", () => {
    expect(pages.map(({ file }) => pathOf(file)).sort()).toEqual(Object.keys(PAGES).sort());
  });

  test.each(pages.map((source) => [pathOf(source.file), source] as const))(
    "%s begins by asking who is there",
    (path, source) => {
      const body =
        /export default async function \w+\([\s\S]*?\)[^{]*\{\n([\s\S]*)/.exec(source.text)?.[1] ?? "";
      const [first = ""] = body.split("\n").filter((line) => line.trim() !== "");
      if (OPEN.includes(path)) {
        expect(source.text).not.toContain("pageContext(");
        if (path === "/sign-in") expect(source.text).toContain("signedInContext()");
        return;
      }
      expect(first).toContain(`pageContext("${path}")`);
    },
  );
});
