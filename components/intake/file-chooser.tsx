"use client";
import { type DragEvent, type ReactNode, useId, useState } from "react";

type FileChooserProps = {
  onChoose: (file: File) => void;
  /** What went wrong with the last file. */
  problem: string | null;
  children?: ReactNode;
};

/** The browser's own file button, and room to drop a file on. */
export function FileChooser({ onChoose, problem, children }: FileChooserProps) {
  const id = useId();
  const [over, setOver] = useState(false);
  const take = (files: FileList | null) => {
    const [file] = files ?? [];
    if (file) onChoose(file);
  };
  const drop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    take(event.dataTransfer.files);
  };
  const hover = (event: DragEvent) => {
    event.preventDefault();
    setOver(true);
  };
  return (
    // biome-ignore lint/a11y/noStaticElementInteractions: dropping is a second way; the button inside is the first
    <div
      onDragOver={hover}
      onDragLeave={() => setOver(false)}
      onDrop={drop}
      className={`flex flex-col items-start gap-2 border border-dashed px-4 py-5 ${over ? "border-accent bg-raised" : "border-edge"}`}
    >
      <label htmlFor={id} className="font-strong">
        Choose a CSV file, or drop one here
      </label>
      <input
        id={id}
        type="file"
        accept=".csv,.gz,.txt,text/csv,application/gzip"
        aria-describedby={problem ? `${id}-hint ${id}-problem` : `${id}-hint`}
        aria-invalid={problem ? true : undefined}
        onChange={(event) => {
          take(event.target.files);
          // The same file chosen again is a change, too.
          event.target.value = "";
        }}
        className="max-w-full file:mr-3 file:min-h-9 file:cursor-pointer file:rounded-edge file:border file:border-edge file:bg-raised file:px-3.5 file:font-strong file:text-ink hover:file:border-ink"
      />
      <p id={`${id}-hint`} className="max-w-[70ch] text-small text-soft">
        Commas between cells, a header on top, UTF-8; plain or gzip, up to 512 MB. Nothing is sent before you
        have said what the columns mean.
      </p>
      {problem && (
        <p id={`${id}-problem`} role="alert" className="text-error">
          <span aria-hidden="true">✕ </span>
          {problem}
        </p>
      )}
      {children}
    </div>
  );
}
