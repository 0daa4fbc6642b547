import { Body, Container, Head, Heading, Html, Link, Preview, Text } from "@react-email/components";
import { render } from "@react-email/render";
import { bothThemes, styles } from "./look";
import type { RenderedMail } from "./weekly-summary";

/** A message of a few lines: what has happened, and where to see to it. */
export type ShortNotice = {
  title: string;
  says: string;
  /** Lines beneath, with or without an address of their own. */
  lines?: readonly { words: string; url?: string }[];
  link: { words: string; url: string };
};

/** The subject, and the same words as HTML and as plain text. */
export async function shortNoticeMail(notice: ShortNotice): Promise<RenderedMail> {
  const { title, says, lines = [], link } = notice;
  const text = [
    title,
    says,
    ...lines.map(({ words, url }) => (url ? `${words}: ${url}` : words)),
    `${link.words}: ${link.url}`,
  ];
  return {
    subject: title,
    html: await render(<Notice notice={notice} />),
    text: `${text.join("\n\n")}\n`,
  };
}

function Notice({ notice: { title, says, lines = [], link } }: { notice: ShortNotice }) {
  return (
    <Html lang="en-GB">
      <Head>
        <meta name="color-scheme" content="light dark" />
        <meta name="supported-color-schemes" content="light dark" />
        <title>{title}</title>
        <style>{bothThemes}</style>
      </Head>
      <Preview>{says}</Preview>
      <Body style={styles.body}>
        <Container style={styles.container}>
          <Heading as="h1" style={styles.title}>
            {title}
          </Heading>
          <Text style={styles.text}>{says}</Text>
          {lines.map(({ words, url }) => (
            <Text key={url ?? words} style={styles.text}>
              {url ? (
                <Link style={styles.link} href={url}>
                  {words}
                </Link>
              ) : (
                words
              )}
            </Text>
          ))}
          <Text style={styles.text}>
            <Link style={styles.link} href={link.url}>
              {link.words}
            </Link>
          </Text>
        </Container>
      </Body>
    </Html>
  );
}
