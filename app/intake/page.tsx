import type { Metadata } from "next";
import { ApiSection } from "@/components/intake/api-section";
import { ImportsSection } from "@/components/intake/imports-section";
import { UploadSection } from "@/components/intake/upload-section";
import { Notice } from "@/components/ui/notice";
import { Page, PageHead } from "@/components/ui/section";
import { mayDo } from "@/lib/auth/demand";
import { pageContext } from "@/lib/auth/page-context";
import { environment } from "@/lib/env";
import { IMPORT_FIELDS } from "@/lib/imports/fields";
import { listKeys } from "@/lib/keys/read";

export const metadata: Metadata = { title: "Intake" };

export default async function IntakePage() {
  const ctx = await pageContext("/intake");
  const mayUpload = mayDo(ctx.actor, "intake.upload");
  const keys = mayDo(ctx.actor, "people.read") ? (await listKeys(ctx)).items : null;
  return (
    <Page>
      <PageHead
        title="Intake"
        lead="How payments come in: as a file, or one by one from the systems that make them."
      />
      <Notice kind="caution" title="No full card numbers" className="mb-5">
        Send a token in their place. A payment in which any field looks like a card number is refused and not
        stored.
      </Notice>
      {mayUpload && <UploadSection fields={IMPORT_FIELDS} />}
      <ImportsSection mayUpload={mayUpload} />
      <ApiSection
        origin={new URL(environment().APP_URL).origin}
        keys={keys?.filter(({ scopes }) => scopes.includes("transactions:write")) ?? null}
      />
    </Page>
  );
}
