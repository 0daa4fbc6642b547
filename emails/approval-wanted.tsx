import { Body, Container, Head, Heading, Html, Link, Preview, Text } from "@react-email/components";
import { render } from "@react-email/render";
import { bothThemes, styles } from "./look";
import type { RenderedMail } from "./weekly-summary";

export type ApprovalWantedProps = {
  proposer: string;
  reason: string;
  /** How many terms differ from the version in force. */
  changes: number;
  appUrl: string;
};

/** Tells somebody who may approve a policy that a proposal waits for a second person. */
export async function approvalWantedMail(props: ApprovalWantedProps): Promise<RenderedMail> {
  const words = wordsOf(props);
  return {
    subject: words.title,
    html: await render(<ApprovalWanted words={words} />),
    text: `${[words.title, words.says, `Reason: ${props.reason}`, `${words.link}: ${words.url}`].join("\n\n")}\n`,
  };
}

function wordsOf({ proposer, reason, changes, appUrl }: ApprovalWantedProps) {
  return {
    title: "A policy change waits for approval",
    says: `${proposer} proposes to change ${changes === 1 ? "one term" : `${changes} terms`} of the policy. Nothing changes until somebody else approves it.`,
    reason,
    link: "See what would change",
    url: `${appUrl}/policy`,
  };
}

function ApprovalWanted({ words }: { words: ReturnType<typeof wordsOf> }) {
  return (
    <Html lang="en-GB">
      <Head>
        <meta name="color-scheme" content="light dark" />
        <meta name="supported-color-schemes" content="light dark" />
        <title>{words.title}</title>
        <style>{bothThemes}</style>
      </Head>
      <Preview>{words.says}</Preview>
      <Body style={styles.body}>
        <Container style={styles.container}>
          <Heading as="h1" style={styles.title}>
            {words.title}
          </Heading>
          <Text style={styles.text}>{words.says}</Text>
          <Text style={styles.text}>Reason: {words.reason}</Text>
          <Text style={styles.text}>
            <Link style={styles.link} href={words.url}>
              {words.link}
            </Link>
          </Text>
        </Container>
      </Body>
    </Html>
  );
}
