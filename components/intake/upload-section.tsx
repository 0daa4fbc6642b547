"use client";
import Link from "next/link";
import { useEffect, useRef } from "react";
import type { ImportField } from "@/lib/imports/fields";
import type { ImportView } from "@/lib/imports/schema";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { FileChooser } from "./file-chooser";
import { sizeWords } from "./import-words";
import { MappingForm } from "./mapping-form";
import { ProgressBar } from "./progress-bar";
import { type Chosen, useUpload } from "./use-upload";

export function UploadSection({ fields }: { fields: readonly ImportField[] }) {
  const { stage, choose, change, send, cancel, startOver } = useUpload(fields);
  return (
    <Section title="Send a file" lead="Payments that happened already, or that no system sends by itself.">
      {stage.at === "choosing" && (
        <div className="flex flex-col gap-4">
          {stage.sent && <SentNotice sent={stage.sent} />}
          <FileChooser onChoose={choose} problem={stage.problem} />
        </div>
      )}
      {stage.at === "mapping" && (
        <MappingForm
          chosen={stage.chosen}
          fields={fields}
          problem={stage.problem}
          onChange={change}
          onSend={send}
          onStartOver={startOver}
        />
      )}
      {stage.at === "sending" && (
        <Sending chosen={stage.chosen} sentBytes={stage.sentBytes} onCancel={cancel} />
      )}
    </Section>
  );
}

type SendingProps = { chosen: Chosen; sentBytes: number; onCancel: () => void };

function Sending({ chosen: { file }, sentBytes, onCancel }: SendingProps) {
  const headingRef = useRef<HTMLHeadingElement>(null);
  useEffect(() => headingRef.current?.focus(), []);
  const isOut = sentBytes >= file.size;
  return (
    <div className="flex flex-col items-start gap-3">
      <div>
        <h3 ref={headingRef} tabIndex={-1} className="font-strong outline-none">
          Sending {file.name}
        </h3>
        <p className="text-small text-soft">
          Keep this window open until it is there; other pages of Cupel are fine.
        </p>
      </div>
      <div className="w-full">
        <ProgressBar
          label={`Sending ${file.name}`}
          percent={Math.floor((100 * sentBytes) / file.size)}
          says={isOut ? "All sent; being stored" : `${sizeWords(sentBytes)} of ${sizeWords(file.size)} sent`}
        />
      </div>
      <Button onClick={onCancel}>Cancel</Button>
    </div>
  );
}

/** Says that the transfer is over, and leads on; the button that was pressed last is gone. */
function SentNotice({ sent }: { sent: ImportView }) {
  const linkRef = useRef<HTMLAnchorElement>(null);
  useEffect(() => linkRef.current?.focus(), []);
  return (
    <Notice title={`${sent.fileName} came in whole and is being read`}>
      You may leave; reading goes on.{" "}
      <Link ref={linkRef} href={`/intake/${sent.id}`} className="underline">
        Follow it
      </Link>
    </Notice>
  );
}
