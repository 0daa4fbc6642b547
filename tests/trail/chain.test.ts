import { createHash } from "node:crypto";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { canonicalJson, entryHash, GENESIS_HASH } from "@/lib/trail/chain";
import { type ChainRow, checkRows, EMPTY_CHECK, endsAt } from "@/lib/trail/check-chain";

const sha256 = (text: string) => createHash("sha256").update(text, "utf8").digest("hex");

describe("canonical JSON", () => {
  // Structure sample of the test data that the author of RFC 8785 publishes with it.
  test("sorts names at every depth as RFC 8785 does", () => {
    const given = JSON.parse(
      '{"1":{"f":{"f":"hi","F":5},"\\n":56.0},"10":{},"":"empty","a":{},"111":[{"e":"yes","E":"no"}],"A":{}}',
    );
    const canonical = canonicalJson(given);
    expect(canonical).toBe(
      '{"":"empty","1":{"\\n":56,"f":{"F":5,"f":"hi"}},"10":{},"111":[{"E":"no","e":"yes"}],"A":{},"a":{}}',
    );
    expect(sha256(canonical)).toBe("605f65004ec2db7692522a0852c22f1c989e036d547e88963d1a3143cf3195d5");
  });

  // Numbers of the same test data, and of ECMAScript's Number::toString, which RFC 8785 prescribes.
  test.each([
    ["333333333.33333329", "333333333.3333333"],
    ["1E30", "1e+30"],
    ["4.50", "4.5"],
    ["2e-3", "0.002"],
    ["0.000000000000000000000000001", "1e-27"],
    ["-0", "0"],
    ["1e21", "1e+21"],
  ])("writes the number %s as %s", (given, canonical) => {
    expect(canonicalJson(JSON.parse(given))).toBe(canonical);
  });

  test("refuses what JSON cannot hold", () => {
    expect(() => canonicalJson(Number.NaN)).toThrow();
    expect(() => canonicalJson(Number.POSITIVE_INFINITY)).toThrow();
    expect(() => canonicalJson(undefined)).toThrow(TypeError);
  });

  test("orders names by UTF-16 code units and normalises nothing", () => {
    // U+1F600 begins with the unit D83D, which sorts before FB33; é and e + accent stay two names.
    expect(canonicalJson({ "\ufb33": 1, "\u{1f600}": 2, "e\u0301": 3, "\u00e9": 4 })).toBe(
      '{"e\u0301":3,"\u00e9":4,"\u{1f600}":2,"\ufb33":1}',
    );
  });
});

// Three entries of another shape, hashed alike by independent programs in Python and Node.
test("a chain of SHA-256 over canonical JSON gives the known hashes", () => {
  const acts = [
    ["r1", "2026-01-05T09:00:00Z", "C-1", "fraud"],
    ["r2", "2026-01-05T09:01:00Z", "C-2", "legitimate"],
    ["s1", "2026-01-05T09:02:00Z", "C-1", "legitimate"],
  ];
  let prev = "0".repeat(64);
  const hashes = acts.map(([actor, at, caseName, decision], index) => {
    prev = sha256(canonicalJson({ actor, at, case: caseName, decision, prev, seq: index + 1 }));
    return prev;
  });
  expect(hashes).toEqual([
    "3083a0168e2ccb5ea17b0e13b4c9a87f1d1894859721bb033f6e0fb8201f5f8c",
    "ba59708f049173863cabe38445725a4faccab66c3119ff954f05bba85b732144",
    "9f0edebc8d9d3e272dc3d6d298217d5911efd3f0e2e0f772c452fcffb351561a",
  ]);
});

// Worked out in Python (json.dumps with sorted keys, hashlib). A trail already written depends on it.
test("the hash of an entry stays what it was", () => {
  const fields = {
    seq: 1,
    at: "2026-12-01T09:00:00.000Z",
    act: "case.decided",
    actorKind: "person",
    actorId: "0199a000-0000-7000-8000-000000000001",
    onBehalfOf: null,
    subjectKind: "decision",
    subjectId: "d-1",
    caseId: null,
    requestId: "r-1",
    facts: canonicalJson({ verdict: "fraudulent", loss: 0.3 }),
  };
  expect(entryHash(fields, GENESIS_HASH).toString("hex")).toBe(
    "e5eb368833a5040414399fd38d5dffdc34907700b42fc274b894d8daac2d916c",
  );
});

function chainOf(acts: readonly string[]): ChainRow[] {
  let previousHash: Buffer = GENESIS_HASH;
  return acts.map((act, index) => {
    const fields = {
      seq: index + 1,
      at: new Date(Date.UTC(2026, 0, 5, 9, index)).toISOString(),
      act,
      actorKind: "person",
      actorId: "p",
      onBehalfOf: null,
      subjectKind: "case",
      subjectId: "c",
      caseId: null,
      requestId: "r",
      facts: canonicalJson({ index }),
    };
    const hash = entryHash(fields, previousHash);
    const row = { ...fields, previousHash, hash };
    previousHash = hash;
    return row;
  });
}

const headOf = (rows: readonly ChainRow[]) => {
  const last = rows.at(-1);
  return { seq: last?.seq ?? 0, hash: last?.hash ?? GENESIS_HASH };
};

const chains = fc.array(fc.constantFrom("case.decided", "case.claimed", "person.signed_in"), {
  minLength: 2,
  maxLength: 30,
});
const placed = chains.chain((acts) => fc.tuple(fc.constant(acts), fc.nat({ max: acts.length - 1 })));

describe("the check of the chain", () => {
  test("finds an untouched chain intact, in one piece or in several", () => {
    fc.assert(
      fc.property(placed, ([acts, cut]) => {
        const rows = chainOf(acts);
        const whole = endsAt(checkRows(EMPTY_CHECK, rows), headOf(rows));
        const pieces = checkRows(checkRows(EMPTY_CHECK, rows.slice(0, cut)), rows.slice(cut));
        expect(whole).toMatchObject({ intact: true, entries: acts.length, firstBrokenSeq: null });
        expect(endsAt(pieces, headOf(rows))).toEqual(whole);
      }),
    );
  });

  test("finds a changed field at its place", () => {
    fc.assert(
      fc.property(placed, ([acts, at]) => {
        const rows = chainOf(acts);
        const changed = rows.map((row, i) => (i === at ? { ...row, facts: '{"index":99}' } : row));
        expect(endsAt(checkRows(EMPTY_CHECK, changed), headOf(rows))).toMatchObject({
          intact: false,
          firstBrokenSeq: at + 1,
        });
      }),
    );
  });

  test("finds a change whose own hash was worked out again at the entry behind it", () => {
    const rows = chainOf(["case.claimed", "case.decided", "case.decided"]);
    const forged = rows.map((row, i) => {
      if (i !== 0) return row;
      const { previousHash, hash: _, ...fields } = { ...row, act: "case.released" };
      return { ...fields, previousHash, hash: entryHash(fields, previousHash) };
    });
    expect(checkRows(EMPTY_CHECK, forged)).toMatchObject({ intact: false, firstBrokenSeq: 2 });
  });

  test("finds a deleted entry, also where those behind it were numbered anew", () => {
    fc.assert(
      fc.property(placed, ([acts, at]) => {
        const rows = chainOf(acts);
        const gap = rows.filter((_, i) => i !== at);
        const closed = gap.map((row, i) => ({ ...row, seq: i + 1 }));
        for (const damaged of [gap, closed]) {
          const check = endsAt(checkRows(EMPTY_CHECK, damaged), headOf(rows));
          expect(check).toMatchObject({ intact: false, firstBrokenSeq: at + 1 });
        }
      }),
    );
  });

  test("finds an inserted entry", () => {
    fc.assert(
      fc.property(placed, ([acts, at]) => {
        const rows = chainOf(acts);
        const stranger = { ...(rows[at] as ChainRow), act: "policy.approved" };
        const inserted = [...rows.slice(0, at), stranger, ...rows.slice(at)];
        expect(endsAt(checkRows(EMPTY_CHECK, inserted), headOf(rows))).toMatchObject({
          intact: false,
          firstBrokenSeq: at + 1,
        });
      }),
    );
  });

  test("finds two swapped entries", () => {
    fc.assert(
      fc.property(chains, (acts) => {
        const rows = chainOf(acts);
        const [first, second, ...rest] = rows as [ChainRow, ChainRow, ...ChainRow[]];
        const swapped = [{ ...second, seq: 1 }, { ...first, seq: 2 }, ...rest];
        expect(checkRows(EMPTY_CHECK, swapped)).toMatchObject({ intact: false, firstBrokenSeq: 1 });
      }),
    );
  });

  test("finds a cut-off end against the head, and against nothing else", () => {
    fc.assert(
      fc.property(placed, ([acts, at]) => {
        const rows = chainOf(acts);
        const cut = rows.slice(0, at);
        expect(endsAt(checkRows(EMPTY_CHECK, cut), headOf(rows))).toMatchObject({
          intact: false,
          firstBrokenSeq: at + 1,
        });
        expect(endsAt(checkRows(EMPTY_CHECK, cut), headOf(cut)).intact).toBe(true);
      }),
    );
  });
});
