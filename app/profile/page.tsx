import type { Metadata } from "next";
import { PasswordForm } from "@/components/profile/password-form";
import { TimeZoneForm } from "@/components/profile/time-zone-form";
import { ThemeSwitch } from "@/components/shell/theme-switch";
import { Page, PageHead, Section } from "@/components/ui/section";
import { ROLE_WORDS } from "@/components/words";
import { pageContext } from "@/lib/auth/page-context";
import { readProfile } from "@/lib/profile/read";

export const metadata: Metadata = { title: "Profile" };

export default async function ProfilePage() {
  const ctx = await pageContext("/profile");
  const { name, email, roles, timeZone } = await readProfile(ctx);
  const zones = [...new Set(["UTC", timeZone, ...Intl.supportedValuesOf("timeZone")])].sort();
  const roleNames = roles.map((role) => ROLE_WORDS[role]).join(", ");
  return (
    <Page>
      <PageHead title={name} lead={`${email}. ${roleNames || "No roles yet"}.`} />
      <Section title="Password" lead="Changing it ends your sessions on other machines.">
        <PasswordForm email={email} />
      </Section>
      <Section title="Time zone">
        <TimeZoneForm timeZone={timeZone} zones={zones} />
      </Section>
      <Section title="Theme" lead="Kept in this browser.">
        <ThemeSwitch />
      </Section>
    </Page>
  );
}
