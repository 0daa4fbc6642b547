import { Readable } from "node:stream";
import { gzipSync } from "node:zlib";
import { expect, test } from "vitest";
import { linesOf } from "@/lib/imports/lines";

async function read(content: Buffer, pieceBytes = 1_000): Promise<string[]> {
  let given = 0;
  const pieces = function* () {
    for (let from = 0; from < content.byteLength; from += pieceBytes) {
      const piece = content.subarray(from, from + pieceBytes);
      given += piece.byteLength;
      yield piece;
    }
  };
  const lines: string[] = [];
  for await (const line of linesOf(Readable.from(pieces()), () => given)) lines.push(line);
  return lines;
}

test("lines end with LF or CRLF, and a letter cut in two by a piece stays whole", async () => {
  expect(await read(Buffer.from("ä,1\r\nö,2\nü,3", "utf8"), 1)).toEqual(["ä,1", "ö,2", "ü,3"]);
});

test("gzip is unpacked on the way", async () => {
  const lines = Array.from({ length: 5_000 }, (_, index) => `row ${index}`);
  expect(await read(gzipSync(lines.join("\n")))).toEqual(lines);
});

test("a gzip file that was cut off says so after the lines that were whole", async () => {
  const whole = gzipSync(
    Array.from({ length: 50_000 }, (_, index) => `row ${index} ${index * 7919}`).join("\n"),
  );
  await expect(read(whole.subarray(0, whole.byteLength / 2))).rejects.toThrow("it was cut off");
});

test("a damaged gzip file says so", async () => {
  const damaged = Buffer.from(gzipSync("a,b\n".repeat(10_000)));
  damaged.fill(0x5a, 12, 40);
  await expect(read(damaged)).rejects.toThrow(/damaged|cut off/);
});

test("a file made to unpack without end is left before it fills the memory", async () => {
  const bomb = gzipSync(Buffer.alloc(64 * 1024 ** 2));
  expect(bomb.byteLength).toBeLessThan(70_000);
  await expect(read(bomb, 1024 ** 2)).rejects.toThrow(/unpacks to far more|line of more than 256 KB/);
});

test("a bomb of ordinary lines is left, too", async () => {
  const bomb = gzipSync(Buffer.from(`${"a".repeat(1_000)},b\n`.repeat(32 * 1024)));
  await expect(read(bomb, 1024 ** 2)).rejects.toThrow("unpacks to far more");
});
