import type { Metadata } from "next";
import { redirect } from "next/navigation";
import { Mark } from "@/components/shell/mark";
import { SignInForm } from "@/components/sign-in/sign-in-form";
import { Page, PageHead } from "@/components/ui/section";
import { localPath } from "@/lib/auth/asked-path";
import { listDemoSignIns } from "@/lib/auth/demo-sign-ins";
import { signedInContext } from "@/lib/auth/page-context";

export const metadata: Metadata = { title: "Sign in" };

type SignInPageProps = { searchParams: Promise<Record<string, string | string[] | undefined>> };

export default async function SignInPage({ searchParams }: SignInPageProps) {
  const { from } = await searchParams;
  const onward = localPath(typeof from === "string" ? from : undefined);
  if (await signedInContext()) redirect(onward);
  return (
    <Page>
      <p className="mb-6 flex items-center gap-2 border-b border-rule pb-3 font-strong tracking-wide">
        <Mark />
        Cupel
      </p>
      <PageHead title="Sign in" lead="Payment-fraud alerts, weighed and decided." />
      <SignInForm from={onward} demoSignIns={listDemoSignIns()} />
    </Page>
  );
}
