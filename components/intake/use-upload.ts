"use client";
import { useQueryClient } from "@tanstack/react-query";
import { useEffect, useRef, useState } from "react";
import type { ImportField } from "@/lib/imports/fields";
import type { ImportView } from "@/lib/imports/schema";
import { newId } from "@/lib/new-id";
import { ApiProblem } from "../api";
import { guessTargets, mappingOf, type Target } from "./columns";
import { type FileColumn, readFileHead } from "./file-head";
import { sendFile } from "./send-file";

export type Chosen = {
  /** Another one whenever what is to be sent changes. */
  sentId: string;
  file: File;
  columns: FileColumn[];
  targets: Target[];
  source: string;
};
export type UploadStage =
  | { at: "choosing"; problem: string | null; sent: ImportView | null }
  | { at: "mapping"; chosen: Chosen; problem: ApiProblem | null }
  | { at: "sending"; chosen: Chosen; sentBytes: number };

const START: UploadStage = { at: "choosing", problem: null, sent: null };
/** What the API takes where no source is given. */
const DEFAULT_SOURCE = "csv";

/** A file on its way from being chosen to being sent; one at a time. */
export function useUpload(fields: readonly ImportField[]) {
  const client = useQueryClient();
  const [stage, setStage] = useState<UploadStage>(START);
  const sending = useRef<AbortController | null>(null);
  const newest = useRef<File | null>(null);
  useWarningBeforeLeaving(stage.at === "sending");

  async function choose(file: File) {
    newest.current = file;
    const head = await readFileHead(file);
    if (newest.current !== file) return;
    if ("problem" in head) {
      setStage({ at: "choosing", problem: `${file.name}: ${head.problem}`, sent: null });
      return;
    }
    const targets = guessTargets(
      head.columns.map(({ name }) => name),
      fields,
    );
    const chosen = { sentId: newId(), file, columns: head.columns, targets, source: DEFAULT_SOURCE };
    setStage({ at: "mapping", chosen, problem: null });
  }

  function change(changes: Partial<Pick<Chosen, "targets" | "source">>) {
    setStage((now) =>
      now.at === "mapping"
        ? { ...now, problem: null, chosen: { ...now.chosen, ...changes, sentId: newId() } }
        : now,
    );
  }

  async function send(chosen: Chosen) {
    const controller = new AbortController();
    sending.current = controller;
    setStage({ at: "sending", chosen, sentBytes: 0 });
    const names = chosen.columns.map(({ name }) => name);
    const onProgress = (sentBytes: number) =>
      setStage((now) => (now.at === "sending" ? { ...now, sentBytes } : now));
    try {
      const sent = await sendFile(
        {
          sentId: chosen.sentId,
          file: chosen.file,
          source: chosen.source,
          mapping: mappingOf(names, chosen.targets),
        },
        { onProgress, signal: controller.signal },
      );
      if (sent === null) setStage({ at: "mapping", chosen, problem: null });
      else setStage({ at: "choosing", problem: null, sent });
    } catch (error) {
      if (!(error instanceof ApiProblem)) throw error;
      setStage({ at: "mapping", chosen, problem: error });
    }
    await client.invalidateQueries({ queryKey: ["imports"] });
  }

  return {
    stage,
    choose: (file: File) => void choose(file),
    change,
    send: (chosen: Chosen) => void send(chosen),
    cancel: () => sending.current?.abort(),
    startOver: () => {
      newest.current = null;
      setStage(START);
    },
  };
}

/** A transfer goes on behind other pages of ours, but not when the browser leaves them. */
function useWarningBeforeLeaving(active: boolean) {
  useEffect(() => {
    if (!active) return;
    const warn = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener("beforeunload", warn);
    return () => window.removeEventListener("beforeunload", warn);
  }, [active]);
}
