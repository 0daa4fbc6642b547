import type { ImportView } from "@/lib/imports/schema";
import { type ApiProblem, api, noAnswer, problemFrom } from "../api";
import type { Target } from "./columns";

/** `sentId` is its idempotency key: the same one sent again after a lost answer makes no second import. */
export type Upload = { sentId: string; file: File; source: string; mapping: Record<string, Target> };

type Options = { onProgress: (sentBytes: number) => void; signal: AbortSignal };

/**
 * Sends the form with the file last. Only XMLHttpRequest tells how much has gone out.
 * @returns the import, or null when the signal was given
 * @throws ApiProblem
 */
export async function sendFile(upload: Upload, options: Options): Promise<ImportView | null> {
  // Asks for the password before a long transfer rather than after it.
  await api("GET /api/imports", { limit: 1 });
  if (options.signal.aborted) return null;
  return new Promise((resolve, reject) => post(upload, options, resolve, reject));
}

function post(
  { sentId, file, source, mapping }: Upload,
  { onProgress, signal }: Options,
  resolve: (view: ImportView | null) => void,
  reject: (problem: ApiProblem) => void,
): void {
  const form = new FormData();
  form.set("source", source);
  form.set("mapping", JSON.stringify(mapping));
  form.set("file", file);
  const request = new XMLHttpRequest();
  request.open("POST", "/api/imports");
  request.setRequestHeader("Idempotency-Key", sentId);
  request.upload.onprogress = (event) => onProgress(Math.min(event.loaded, file.size));
  request.onload = () => {
    if (request.status === 202) resolve(JSON.parse(request.responseText) as ImportView);
    else reject(problemFrom(request.status, request.getResponseHeader("Content-Type"), request.responseText));
  };
  request.onerror = () => reject(noAnswer());
  request.onabort = () => resolve(null);
  signal.addEventListener("abort", () => request.abort(), { once: true });
  request.send(form);
}
