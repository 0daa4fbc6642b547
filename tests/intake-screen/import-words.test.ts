import { expect, test } from "vitest";
import { isUnfinished, percentRead, sizeWords, standingOf } from "@/components/intake/import-words";
import { IMPORT_STATES } from "@/lib/transactions/codes";

const view = (changes: Partial<Parameters<typeof standingOf>[0]>) => ({
  state: "done" as const,
  rowsDone: 10,
  rejected: 0,
  readBytes: 100,
  sizeBytes: 100,
  ...changes,
});

test.each([
  [{ state: "receiving" as const }, "Coming in"],
  [{ state: "queued" as const }, "Waiting to be read"],
  [{ state: "running" as const, readBytes: 999, sizeBytes: 1_000 }, "Being read, 99 %"],
  [{}, "Read"],
  [{ rejected: 1 }, "Read, 1 row rejected"],
  [{ rejected: 12 }, "Read, 12 rows rejected"],
  [{ state: "failed" as const }, "Stopped before its end"],
  [{ state: "failed" as const, rowsDone: 0 }, "Not read"],
])("%j stands as %j", (changes, words) => {
  expect(standingOf(view(changes))).toBe(words);
});

test("what comes in, waits or is read is followed; what is read or stopped is not", () => {
  expect(IMPORT_STATES.filter((state) => isUnfinished({ state }))).toEqual([
    "receiving",
    "queued",
    "running",
  ]);
});

test("an empty file is read by no percent, and more than all is all", () => {
  expect(percentRead({ readBytes: 0, sizeBytes: 0 })).toBe(0);
  expect(percentRead({ readBytes: 3, sizeBytes: 2 })).toBe(100);
});

test.each([
  [0, "0\u00a0bytes"],
  [999, "999\u00a0bytes"],
  [1_000, "1.0\u00a0KB"],
  [1_536, "1.5\u00a0KB"],
  [102_400, "100\u00a0KB"],
  [1_023_500, "1.0\u00a0MB"],
  [536_870_912, "512\u00a0MB"],
])("%d bytes read as %j", (bytes, words) => {
  expect(sizeWords(bytes)).toBe(words);
});
