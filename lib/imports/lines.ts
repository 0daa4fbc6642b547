import "server-only";
import { Readable } from "node:stream";
import { StringDecoder } from "node:string_decoder";
import { createGunzip } from "node:zlib";
import { KnownError } from "../errors";

/** Card rows compress about twelve times; a file that unpacks two hundred times its size is made to exhaust us. */
const LARGEST_RATIO = 200;
const LARGEST_UNPACKED_BYTES = 8 * 1024 ** 3;
const LONGEST_LINE_CHARS = 256 * 1024;

/** The file cannot be read any further; the message is for the person who sent it. */
export class UnreadableFile extends KnownError {
  constructor(message: string) {
    super("invalid", message);
  }
}

/**
 * Lines of a text file, unpacked on the way where it is gzip, with no more in memory than a few pieces of it.
 * @param packedBytes bytes of the file read so far, for the limit on unpacking
 * @throws UnreadableFile
 */
export async function* linesOf(file: Readable, packedBytes: () => number): AsyncGenerator<string> {
  const decoder = new StringDecoder("utf8");
  let rest = "";
  let unpackedBytes = 0;
  for await (const piece of unpacked(file)) {
    unpackedBytes += piece.byteLength;
    if (
      unpackedBytes > LARGEST_UNPACKED_BYTES ||
      unpackedBytes > LARGEST_RATIO * Math.max(packedBytes(), 64 * 1024)
    ) {
      throw new UnreadableFile("The file unpacks to far more than its size and was not read to its end");
    }
    const text = rest + decoder.write(piece);
    const lines = text.split("\n");
    rest = lines.pop() ?? "";
    if (rest.length > LONGEST_LINE_CHARS) throw new UnreadableFile("The file has a line of more than 256 KB");
    for (const line of lines) yield withoutReturn(line);
  }
  rest += decoder.end();
  if (rest !== "") yield withoutReturn(rest);
}

async function* unpacked(file: Readable): AsyncGenerator<Buffer> {
  const pieces = file[Symbol.asyncIterator]() as AsyncIterator<Buffer>;
  const first = await pieces.next();
  if (first.done) return;
  const all = async function* () {
    yield first.value;
    for (let next = await pieces.next(); !next.done; next = await pieces.next()) yield next.value;
  };
  const isGzip = first.value[0] === 0x1f && first.value[1] === 0x8b;
  if (!isGzip) {
    yield* all();
    return;
  }
  const source = Readable.from(all());
  const gunzip = createGunzip();
  source.once("error", (error) => gunzip.destroy(error));
  try {
    yield* source.pipe(gunzip) as AsyncIterable<Buffer>;
  } catch (error) {
    throw unreadable(error);
  } finally {
    source.destroy();
  }
}

function unreadable(error: unknown): unknown {
  const code = error instanceof Error && "code" in error ? error.code : null;
  if (code === "Z_BUF_ERROR") return new UnreadableFile("The gzip file ends before its end: it was cut off");
  if (typeof code === "string" && code.startsWith("Z_"))
    return new UnreadableFile("The gzip file is damaged");
  return error;
}

const withoutReturn = (line: string) => (line.endsWith("\r") ? line.slice(0, -1) : line);
