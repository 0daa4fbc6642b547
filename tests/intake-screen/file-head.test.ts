import { gzipSync } from "node:zlib";
import { expect, test } from "vitest";
import { readFileHead } from "@/components/intake/file-head";

const fileOf = (content: string | Uint8Array<ArrayBuffer>, name = "a.csv") => new File([content], name);
const packed = (content: string | Buffer) => new Uint8Array(gzipSync(content));

test("shows the header and the first rows, plain or gzip, with or without a mark of byte order", async () => {
  const text = '\uFEFF ref ,amount,note\r\nA,1.00,"x, y"\r\nB,2.00,\r\nC,3.00,z\r\nD,4.00,not shown\r\n';
  const head = {
    columns: [
      { name: "ref", samples: ["A", "B", "C"] },
      { name: "amount", samples: ["1.00", "2.00", "3.00"] },
      { name: "note", samples: ["x, y", "", "z"] },
    ],
  };
  expect(await readFileHead(fileOf(text))).toEqual(head);
  expect(await readFileHead(fileOf(packed(text), "a.csv.gz"))).toEqual(head);
});

test("of a large file only the beginning is read, and a bad row in it is no obstacle", async () => {
  const rows = Array.from({ length: 400_000 }, (_, index) =>
    index === 0 ? 'bad"row,1' : `R-${index},${index}.00`,
  );
  const head = await readFileHead(fileOf(packed(["ref,amount", ...rows].join("\n"))));
  expect(head).toEqual({
    columns: [
      { name: "ref", samples: ["R-1", "R-2"] },
      { name: "amount", samples: ["1.00", "2.00"] },
    ],
  });
});

test("a gzip file that was cut off still shows its beginning", async () => {
  const whole = packed(
    Array.from({ length: 200_000 }, (_, index) => `a${index * 7919},b${index}`).join("\n"),
  );
  const head = await readFileHead(fileOf(whole.slice(0, whole.byteLength / 4)));
  expect(head).toMatchObject({ columns: [{ name: "a0" }, { name: "b0" }] });
});

test("a cell that looks like a card number is not shown", async () => {
  const head = await readFileHead(fileOf("ref,card\nA,4111 1111 1111 1111\nB,tok_9\n"));
  expect(head).toMatchObject({ columns: [{ samples: ["A", "B"] }, { samples: [null, "tok_9"] }] });
});

test.each([
  ["nothing", "", "The file is empty."],
  ["line breaks only", "\n\n", "The file has no line that could be a header."],
  ["semicolons", "ref;amount;currency\nA;1,00;EUR\n", /seems to use semicolons/],
  ["tabs", "ref\tamount\tcurrency\n", /seems to use tabs/],
  ["a quote that is never closed", '"ref,amount\nA,1.00\n', /first line has a quote that is never closed/],
  ["a card number on top", "4111111111111111,12.00,EUR\n", /must be a header/],
  [
    "201 columns",
    `${Array.from({ length: 201 }, (_, index) => `c${index}`).join(",")}\n`,
    /more than 200 columns/,
  ],
  ["a long text on top", `${"x".repeat(201)},b\n`, /does not look like a header/],
] as const)("a file with %s is told in plain words", async (_, content, problem) => {
  expect(await readFileHead(fileOf(content))).toEqual({
    problem: typeof problem === "string" ? problem : expect.stringMatching(problem),
  });
});

test.each([
  ["a spreadsheet", Uint8Array.from([0x50, 0x4b, 3, 4, 20, 0]), /spreadsheet/],
  ["a picture", Uint8Array.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a]), /not text in UTF-8/],
  ["damaged gzip", Uint8Array.from([0x1f, 0x8b, 8, 0, 1, 2, 3, 4, 5, 6]), /damaged/],
])("%s is told in plain words", async (_, bytes, problem) => {
  expect(await readFileHead(fileOf(bytes))).toEqual({ problem: expect.stringMatching(problem) });
});
