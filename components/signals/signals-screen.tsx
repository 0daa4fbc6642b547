"use client";
import { useRouter } from "next/navigation";
import { useState } from "react";
import type { OwnSignalView, SignalsView } from "@/lib/signals/own-schema";
import { PROTECTED_ATTRIBUTES } from "@/lib/signals/protected-attributes";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { Page, PageHead } from "../ui/section";
import { CatalogueSection } from "./catalogue-section";
import { OwnSection } from "./own-section";
import { SignalEditor } from "./signal-editor";

type SignalsScreenProps = { view: SignalsView; mayManage: boolean };

/** What the scorer weighs: the team's own signals, and the catalogue. */
export function SignalsScreen({ view, mayManage }: SignalsScreenProps) {
  const router = useRouter();
  const [editing, setEditing] = useState<OwnSignalView | "new" | null>(null);
  const [said, setSaid] = useState<string | null>(null);
  const done = (words: string) => {
    setEditing(null);
    setSaid(words);
    router.refresh();
  };
  return (
    <Page>
      <PageHead
        title="Signals"
        lead="What is weighed of every payment. Each signal is measured as the payment comes in; what it says for or against fraud, the scorer learns from the team's verdicts."
      >
        {mayManage && (
          <Button look="action" disabled={view.room <= 0} onClick={() => setEditing("new")}>
            Define a signal
          </Button>
        )}
      </PageHead>
      <div aria-live="polite">{said && <Notice className="mb-5">{said}</Notice>}</div>
      <Notice kind="caution" className="mb-5" title="Never a signal">
        Protected attributes of a person: {listText(PROTECTED_ATTRIBUTES)}. The catalogue has none, and a
        formula that names one is refused. Do not bring one in under another name: whoever approves a signal
        reads its formula for that too.
      </Notice>
      <OwnSection view={view} mayManage={mayManage} onEdit={setEditing} onDone={done} />
      <CatalogueSection catalogue={view.catalogue} />
      {editing && (
        <SignalEditor
          signal={editing === "new" ? null : editing}
          onClose={() => setEditing(null)}
          onDone={done}
        />
      )}
    </Page>
  );
}

function listText(words: readonly string[]): string {
  return `${words.slice(0, -1).join(", ")} and ${words.at(-1) ?? ""}`;
}
