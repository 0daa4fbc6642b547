"use client";
import { useRouter } from "next/navigation";
import { useState } from "react";
import type { AddKeyView, KeyView } from "@/lib/keys/schema";
import { api } from "../api";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Section } from "../ui/section";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { type ActingPerson, AddKeyDialog } from "./add-key-dialog";
import { ConfirmDialog } from "./confirm-dialog";
import { ShownOnce } from "./shown-once";

type KeysSectionProps = {
  keys: readonly KeyView[];
  mayManage: boolean;
  /** Whom a key can act for. */
  actingPeople: readonly ActingPerson[];
};

export function KeysSection({ keys, mayManage, actingPeople }: KeysSectionProps) {
  const router = useRouter();
  const [adding, setAdding] = useState(false);
  const [revoking, setRevoking] = useState<KeyView | null>(null);
  const [added, setAdded] = useState<AddKeyView | null>(null);
  const doneAdding = (answer: AddKeyView | null) => {
    setAdding(false);
    setAdded(answer);
    router.refresh();
  };
  const doneRevoking = () => {
    setRevoking(null);
    router.refresh();
  };
  return (
    <Section
      title="Keys"
      lead="Machines send one with every request. A key can do what its scopes name, and no more."
      actions={mayManage && <Button onClick={() => setAdding(true)}>Add a key</Button>}
    >
      {keys.length === 0 ? (
        <EmptyState title="No keys yet">A payment system needs one to send its transactions.</EmptyState>
      ) : (
        <Table caption="API keys" captionHidden>
          <thead>
            <tr>
              <Th>Name</Th>
              <Th>Source</Th>
              <Th>Scopes</Th>
              <Th>Acts for</Th>
              <Th>Last use</Th>
              <Th>Standing</Th>
            </tr>
          </thead>
          <tbody>
            {keys.map((key) => (
              <KeyRow key={key.id} apiKey={key} onRevoke={mayManage ? setRevoking : null} />
            ))}
          </tbody>
        </Table>
      )}
      {adding && <AddKeyDialog people={actingPeople} onClose={() => setAdding(false)} onDone={doneAdding} />}
      {revoking && (
        <ConfirmDialog
          act={() => api("POST /api/keys/{id}/revoke", { id: revoking.id })}
          title={`Revoke the key ${revoking.name}?`}
          says="Requests that carry it are refused from now on. This cannot be taken back."
          verb="Revoke"
          onClose={() => setRevoking(null)}
          onDone={doneRevoking}
        />
      )}
      <ShownOnce
        title={`Key ${added?.key.name ?? ""}`}
        says="Send it as Authorization: Bearer, followed by the key."
        secret={added?.secret ?? null}
        onClose={() => setAdded(null)}
      />
    </Section>
  );
}

type KeyRowProps = { apiKey: KeyView; onRevoke: ((key: KeyView) => void) | null };

function KeyRow({ apiKey, onRevoke }: KeyRowProps) {
  const { name, source, scopes, actsFor, lastUsedAt, revokedAt } = apiKey;
  return (
    <tr className={revokedAt ? "text-soft" : ""}>
      <RowTh>{name}</RowTh>
      <Td className="font-mono">{source}</Td>
      <Td>{scopes.join(", ")}</Td>
      <Td>{actsFor?.name ?? "nobody"}</Td>
      <Td>{lastUsedAt ? <Time at={lastUsedAt} /> : "never"}</Td>
      <Td>
        {revokedAt ? (
          <>
            Revoked <Time at={revokedAt} />
          </>
        ) : onRevoke ? (
          <Button small onClick={() => onRevoke(apiKey)} aria-label={`Revoke: ${name}`}>
            Revoke
          </Button>
        ) : (
          "In use"
        )}
      </Td>
    </tr>
  );
}
