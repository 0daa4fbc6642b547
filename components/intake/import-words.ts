import type { ImportView } from "@/lib/imports/schema";

type State = ImportView["state"];

export const IMPORT_STATE_WORDS: Readonly<Record<State, string>> = {
  receiving: "Coming in",
  queued: "Waiting to be read",
  running: "Being read",
  done: "Read",
  failed: "Stopped",
};

export const isUnfinished = ({ state }: Pick<ImportView, "state">): boolean =>
  state === "receiving" || state === "queued" || state === "running";

/** The state with what matters beside it: "Read, 3 rows rejected". */
export function standingOf(
  view: Pick<ImportView, "state" | "rowsDone" | "rejected" | "readBytes" | "sizeBytes">,
): string {
  const { state, rowsDone, rejected } = view;
  if (state === "running") return `${IMPORT_STATE_WORDS.running}, ${percentRead(view)} %`;
  if (state === "failed") return rowsDone > 0 ? "Stopped before its end" : "Not read";
  if (state === "done" && rejected > 0)
    return `${IMPORT_STATE_WORDS.done}, ${rejected} ${rejected === 1 ? "row" : "rows"} rejected`;
  return IMPORT_STATE_WORDS[state];
}

/** Whole percent of the file that is read; a hundred only when it is. */
export function percentRead({ readBytes, sizeBytes }: Pick<ImportView, "readBytes" | "sizeBytes">): number {
  return sizeBytes === 0 ? 0 : Math.min(100, Math.floor((100 * readBytes) / sizeBytes));
}

const UNITS = ["bytes", "KB", "MB", "GB"] as const;

/** "512 bytes", "3.4 KB", "120 MB": powers of 1024, three figures at most. */
export function sizeWords(bytes: number): string {
  let size = bytes;
  let unit = 0;
  while (Math.round(size) >= 1000 && unit < UNITS.length - 1) {
    size /= 1024;
    unit += 1;
  }
  const figures = unit === 0 || size >= 99.95 ? String(Math.round(size)) : size.toFixed(1);
  return `${figures}\u00a0${UNITS[unit]}`;
}
