import type { ImportView } from "@/lib/imports/schema";
import { Notice } from "../ui/notice";
import { Time } from "../ui/time";
import { IMPORT_STATE_WORDS, percentRead, sizeWords, standingOf } from "./import-words";
import { ProgressBar } from "./progress-bar";

/** Where the import stands, in words; what to do where it stopped. */
export function ImportStanding({ view }: { view: ImportView }) {
  const { state, fileName, readBytes, sizeBytes, rowsDone, finishedAt, problem } = view;
  return (
    <div className="flex flex-col gap-3 pb-5">
      <p role="status">
        <span className="font-strong">
          {state === "running" ? IMPORT_STATE_WORDS.running : standingOf(view)}
        </span>
        {finishedAt && (
          <>
            , <Time at={finishedAt} as="second" />
          </>
        )}
      </p>
      {state === "receiving" && <p className="text-soft">{sizeWords(sizeBytes)} are here so far.</p>}
      {state === "queued" && <p className="text-soft">It is read as soon as those before it are.</p>}
      {state === "running" && (
        <>
          <ProgressBar
            label={`Reading ${fileName}`}
            percent={percentRead(view)}
            says={`${sizeWords(readBytes)} of ${sizeWords(sizeBytes)} read`}
          />
          <p className="text-soft">You may leave this page; reading goes on.</p>
        </>
      )}
      {state === "failed" && (
        <Notice kind="error" title={problem ?? "It stopped, and nothing says why"}>
          {rowsDone > 0
            ? "What is counted below is in; nothing is half-done. Send the whole file again once it is mended: payments that are in are recognised and not taken twice."
            : "Nothing of it is in. Put that right and send the file again."}
        </Notice>
      )}
    </div>
  );
}
