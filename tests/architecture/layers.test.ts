import { describe, expect, test } from "vitest";
import { domainOf, type Import, isShell, readSources, type Source, within } from "./sources";

const sources = readSources();
const byFile = new Map(sources.map((source) => [source.file, source]));
const lib = sources.filter(within("lib"));
const shell = lib.filter(isShell);
const pure = lib.filter((source) => !isShell(source) && domainOf(source.file) !== null);

/** `file: what it imports` for every import that the rule forbids; empty is good. */
function offences(of: readonly Source[], isForbidden: (one: Import, source: Source) => boolean): string[] {
  return of.flatMap((source) =>
    source.imports.filter((one) => isForbidden(one, source)).map((one) => `${source.file}: ${one.from}`),
  );
}

const isPackage = (one: Import, ...names: string[]) =>
  one.file === null && names.some((name) => one.from === name || one.from.startsWith(`${name}/`));
const isIn = (one: Import, folder: string) => one.file?.startsWith(`${folder}/`) ?? false;
const isShellFile = (one: Import) => {
  const target = one.file && byFile.get(one.file);
  return target ? isShell(target) : false;
};

test("the walk finds the project", () => {
  expect(shell.length).toBeGreaterThan(50);
  expect(pure.length).toBeGreaterThan(50);
  expect(sources.flatMap((source) => source.imports).length).toBeGreaterThan(1000);
});

test("every import of ours leads to a file", () => {
  const known = (one: Import) => one.file === null || byFile.has(one.file) || /\.(json|css)$/.test(one.file);
  expect(offences(sources, (one) => !known(one))).toEqual([]);
});

describe("who may import what", () => {
  test("drizzle and the driver stay in db, in lib's shell and in tests", () => {
    const outside = sources.filter(
      (source) =>
        !within("db")(source) &&
        !within("tests")(source) &&
        !within("e2e")(source) &&
        !shell.includes(source),
    );
    expect(offences(outside, (one) => isPackage(one, "drizzle-orm", "mysql2"))).toEqual([]);
  });

  test("components know no database and no shell, types aside", () => {
    const components = sources.filter(within("components"));
    expect(
      offences(
        components,
        (one) => !one.typeOnly && (isIn(one, "db") || isIn(one, "app") || isShellFile(one)),
      ),
    ).toEqual([]);
  });

  test("app goes through lib and components, never to the database", () => {
    expect(offences(sources.filter(within("app")), (one) => !one.typeOnly && isIn(one, "db"))).toEqual([]);
  });

  test("lib knows neither app nor components nor e-mails' neighbours", () => {
    expect(offences(lib, (one) => isIn(one, "app") || isIn(one, "components") || isIn(one, "tests"))).toEqual(
      [],
    );
  });

  test("the tables know of lib only the words it uses and the environment", () => {
    const core = sources.filter((source) => /^db\/(schema\/)?[^/]+\.ts$/.test(source.file));
    const isWord = (one: Import) => /^lib\/(env|[^/]+\/(codes|schema))\.ts$/.test(one.file ?? "");
    expect(offences(core, (one) => !one.typeOnly && isIn(one, "lib") && !isWord(one))).toEqual([]);
  });

  test("e-mails know schema types, money, words and each other", () => {
    // Codes are called the same on screen and in a mail.
    const allowed = /^(emails\/|lib\/(money|decibans)\.ts$|components\/words\.ts$)/;
    const emails = sources.filter(within("emails"));
    expect(offences(emails, (one) => one.file !== null && !one.typeOnly && !allowed.test(one.file))).toEqual(
      [],
    );
  });

  test("the scorer imports nothing but itself", () => {
    const scorer = sources.filter(within("lib/scorer"));
    expect(scorer.length).toBeGreaterThan(5);
    expect(offences(scorer, (one) => !isIn(one, "lib/scorer"))).toEqual([]);
  });
});

describe("pure files", () => {
  test("import nothing that does I/O", () => {
    const IMPURE_SINGLES = ["lib/env.ts", "lib/new-id.ts"];
    const isImpure = (one: Import) =>
      !one.typeOnly &&
      (isShellFile(one) ||
        isIn(one, "db") ||
        IMPURE_SINGLES.includes(one.file ?? "") ||
        (one.from.startsWith("node:") && one.from !== "node:crypto"));
    expect(offences(pure, isImpure)).toEqual([]);
  });

  test("ask neither the clock nor chance nor the environment", () => {
    const asks =
      /\bDate\.now\(|\bnew Date\(\)|\bMath\.random\(|\bperformance\.now\(|\bprocess\.env\b|\bfetch\(|\brandom(Bytes|Int|UUID)\(/;
    expect(pure.filter((source) => asks.test(source.text)).map((source) => source.file)).toEqual([]);
  });

  test("files of lib that hold SQL or secrets say on their first line that they are shell", () => {
    const reaches = (one: Import) =>
      !one.typeOnly &&
      (isPackage(one, "drizzle-orm", "mysql2", "nodemailer", "@node-rs/argon2", "next-auth", "pino") ||
        /^db\/(client|tx|errors|schema\/)/.test(one.file ?? ""));
    expect(
      offences(
        lib.filter((source) => !isShell(source)),
        reaches,
      ),
    ).toEqual([]);
  });
});

describe("domains", () => {
  /** What things are called may be known everywhere: codes, schemas, and the one setting that all amounts rest on. */
  const isVocabulary = (file: string) =>
    /\/(codes|schema|endpoints)\.ts$/.test(file) || file === "lib/transactions/base-currency.ts";

  /** Pairs that need each other, and why. */
  const ARGUED: readonly (readonly [string, string, string])[] = [
    ["trail", "auth", "signing in is in the trail, and reading the trail asks who may"],
    [
      "policy",
      "learning",
      "the scorer starts from the policy's base rate, and is run anew when that changes",
    ],
    ["approvals", "learning", "what needs a second person asks for one, and is done when one approves"],
    ["approvals", "signals", "as above, for the team's own signals"],
    ["approvals", "cases", "waiting cases are ranked anew behind what was approved"],
    ["signals", "learning", "switching one of the team's own signals runs the log anew and shows its weight"],
    [
      "learning",
      "outcomes",
      "where a person's label is taken out of the log, an outcome that had only agreed with it speaks again",
    ],
    [
      "transactions",
      "outcomes",
      "an outcome that came first is applied in the very transaction in which its payment arrives",
    ],
  ];

  test("depend on each other in one direction", () => {
    const edges = new Map<string, Set<string>>();
    for (const source of lib) {
      const from = domainOf(source.file);
      for (const { file, typeOnly } of source.imports) {
        const to = file && domainOf(file);
        if (!from || !to || from === to || typeOnly || isVocabulary(file)) continue;
        if (ARGUED.some(([a, b]) => a === from && b === to)) continue;
        edges.set(from, (edges.get(from) ?? new Set()).add(to));
      }
    }
    expect(cyclesIn(edges)).toEqual([]);
  });
});

/** Every domain that can be reached from itself, with the way round. */
function cyclesIn(edges: ReadonlyMap<string, ReadonlySet<string>>): string[] {
  const found = new Set<string>();
  const walk = (at: string, way: string[]): void => {
    const start = way.indexOf(at);
    if (start >= 0) {
      const round = way.slice(start);
      const first = round.indexOf([...round].sort()[0] as string);
      found.add([...round.slice(first), ...round.slice(0, first)].join(" → "));
      return;
    }
    for (const next of edges.get(at) ?? []) walk(next, [...way, at]);
  };
  for (const domain of edges.keys()) walk(domain, []);
  return [...found].sort();
}
