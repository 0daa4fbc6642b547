import "server-only";
import { Readable } from "node:stream";
import busboy, { type BusboyHeaders } from "@fastify/busboy";
import { invalid, KnownError } from "../errors";

/** The sender went away, or ended the form, before it was whole. */
export class BrokenOff extends KnownError {
  constructor() {
    super("invalid", "The file did not come in whole; send it again", {
      errors: [{ path: "file", message: "did not come in whole" }],
    });
  }
}

export type FormFile = Readable & {
  /** Known at its end: there was more of it than the limit lets in. */
  truncated: boolean;
};
export type FormFields = Record<string, string>;
type OnFile<T> = (fields: FormFields, fileName: string, file: FormFile) => Promise<T>;

/**
 * Reads a form whose text fields stand before its one file, which is handed on as it comes in. What goes wrong stops
 * the reading, and is thrown once `onFile` has ended.
 * @throws KnownError, BrokenOff, and what `onFile` throws
 */
export async function readForm<T>(request: Request, largestBytes: number, onFile: OnFile<T>): Promise<T> {
  const form = openForm(request, largestBytes);
  const source = Readable.fromWeb(request.body as Parameters<typeof Readable.fromWeb>[0]);
  const fields: FormFields = {};
  let file: FormFile | null = null;
  let handling: Promise<T> | null = null;
  return new Promise<T>((resolve, reject) => {
    const refuse = (error: unknown) => {
      source.unpipe(form);
      source.destroy();
      file?.destroy();
      const rejectWithIt = () => reject(error);
      if (handling !== null) handling.then(rejectWithIt, rejectWithIt);
      else rejectWithIt();
    };
    const breakOff = () => refuse(new BrokenOff());
    const refuseField = (path: string, message: string) => refuse(invalid([{ path, message }]));

    form.on("field", (name, value, _nameTruncated, valueTruncated) => {
      if (file) refuseField(name, "must stand before the file");
      else if (valueTruncated) refuseField(name, "is longer than 64 KB");
      else fields[name] = value;
    });
    form.on("fieldsLimit", () => refuseField("", "has too many fields"));
    form.on("filesLimit", () => refuseField("file", "must be one file"));
    form.on("file", (name, part: FormFile, fileName?: string) => {
      file = part;
      part.on("error", breakOff);
      if (name !== "file") return refuseField(name, "is not a known field; the file stands under file");
      handling = onFile(fields, fileName ?? "", part);
      handling.catch(refuse);
    });
    form.once("finish", () => {
      if (handling !== null) handling.then(resolve, reject);
      else refuseField("file", "is missing");
    });
    form.on("error", breakOff);
    source.on("error", breakOff);
    source.pipe(form);
  });
}

function openForm(request: Request, largestBytes: number) {
  const contentType = request.headers.get("Content-Type") ?? "";
  try {
    if (!request.body) throw new Error("There is no body");
    return busboy({
      headers: { "content-type": contentType } as BusboyHeaders,
      limits: { files: 1, fileSize: largestBytes, fields: 10, fieldSize: 64 * 1024 },
    });
  } catch {
    throw new KnownError("unsupported_media", "Send the file as multipart/form-data");
  }
}
