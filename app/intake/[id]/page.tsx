import type { Metadata } from "next";
import { ImportScreen } from "@/components/intake/import-screen";
import { mayDo } from "@/lib/auth/demand";
import { forPage, pageContext } from "@/lib/auth/page-context";
import { notFound } from "@/lib/errors";
import { showImport } from "@/lib/imports/read";
import { ImportInput } from "@/lib/imports/schema";

export const metadata: Metadata = { title: "Import" };

export default async function ImportPage({ params }: { params: Promise<{ id: string }> }) {
  const ctx = await pageContext("/intake/[id]");
  const input = ImportInput.safeParse(await params);
  const view = await forPage(
    ctx,
    "/intake/[id]",
    input.success ? showImport(ctx, input.data) : Promise.reject(notFound("The import")),
  );
  return <ImportScreen key={view.id} first={view} maySeeTrail={mayDo(ctx.actor, "trail.read")} />;
}
