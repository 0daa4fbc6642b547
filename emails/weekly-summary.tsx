import {
  Body,
  Column,
  Container,
  Head,
  Heading,
  Hr,
  Html,
  Link,
  Preview,
  Row,
  Section,
  Text,
} from "@react-email/components";
import { render } from "@react-email/render";
import type { WeekView } from "../lib/losses/schema";
import { bothThemes, styles } from "./look";
import { type SummaryRow, type SummarySection, type SummaryWords, summaryWords } from "./summary-words";

export type WeeklySummaryProps = {
  view: WeekView;
  appUrl: string;
  /** Page on which one click ends the summaries; null in a preview. */
  unsubscribeUrl: string | null;
};

export type RenderedMail = { subject: string; html: string; text: string };

/** The weekly summary as mail. Nothing in it is an image, and no colour carries meaning. */
export async function weeklySummaryMail(props: WeeklySummaryProps): Promise<RenderedMail> {
  const words = summaryWords(props.view);
  return {
    subject: words.subject,
    html: await render(<WeeklySummary {...props} words={words} />),
    text: plainText(words, props),
  };
}

function WeeklySummary({
  words,
  appUrl,
  unsubscribeUrl,
  view,
}: WeeklySummaryProps & { words: SummaryWords }) {
  return (
    <Html lang="en-GB">
      <Head>
        <meta name="color-scheme" content="light dark" />
        <meta name="supported-color-schemes" content="light dark" />
        <title>{words.subject}</title>
        <style>{bothThemes}</style>
      </Head>
      <Preview>{previewOf(words)}</Preview>
      <Body style={styles.body}>
        <Container style={styles.container}>
          <Heading as="h1" style={styles.title}>
            {words.title}
          </Heading>
          <Text style={styles.text}>{words.period}</Text>
          {words.cautions.map((caution) => (
            <Text key={caution} style={styles.caution}>
              {caution}
            </Text>
          ))}
          {words.sections.map((section) => (
            <Figures key={section.heading} section={section} appUrl={appUrl} />
          ))}
          <Hr style={styles.rule} />
          <Text style={styles.text}>
            <Link style={styles.link} href={weekUrl(appUrl, view)}>
              Open this week in Cupel
            </Link>
          </Text>
          {unsubscribeUrl && (
            <Text style={styles.note}>
              You get this every week because your risk manager put you on the list.{" "}
              <Link style={styles.link} href={unsubscribeUrl}>
                Stop these summaries
              </Link>
            </Text>
          )}
        </Container>
      </Body>
    </Html>
  );
}

function Figures({ section, appUrl }: { section: SummarySection; appUrl: string }) {
  return (
    <Section>
      <Heading as="h2" style={styles.heading}>
        {section.heading}
      </Heading>
      {section.lead && <Text style={styles.note}>{section.lead}</Text>}
      {section.rows.length === 0 && <Text style={styles.text}>{section.empty}</Text>}
      {section.rows.map((row) => (
        <Row key={row.label + row.value}>
          <Column>
            <Figure row={row} appUrl={appUrl} />
          </Column>
        </Row>
      ))}
    </Section>
  );
}

/** Label, figure and note beneath one another: no column to squeeze in a narrow window. */
function Figure({ row, appUrl }: { row: SummaryRow; appUrl: string }) {
  return (
    <>
      <Text style={styles.value}>
        {row.path ? (
          <Link style={styles.link} href={appUrl + row.path}>
            {row.label}
          </Link>
        ) : (
          row.label
        )}
        : {row.value}
      </Text>
      {row.note && <Text style={styles.note}>{row.note}</Text>}
    </>
  );
}

function plainText(words: SummaryWords, { appUrl, unsubscribeUrl, view }: WeeklySummaryProps): string {
  const rows = (section: SummarySection) =>
    section.rows.length === 0
      ? [section.empty ?? ""]
      : section.rows.flatMap((row) => [
          `${row.label}: ${row.value}`,
          ...(row.note ? [`  ${row.note}`] : []),
          ...(row.path ? [`  ${appUrl}${row.path}`] : []),
        ]);
  const parts = [
    [words.title, words.period],
    ...(words.cautions.length > 0 ? [words.cautions] : []),
    ...words.sections.map((section) => [
      section.heading.toUpperCase(),
      ...(section.lead ? [section.lead] : []),
      ...rows(section),
    ]),
    [`Open this week in Cupel: ${weekUrl(appUrl, view)}`],
    ...(unsubscribeUrl ? [[`Stop these summaries: ${unsubscribeUrl}`]] : []),
  ];
  return `${parts.map((lines) => lines.join("\n")).join("\n\n")}\n`;
}

const weekUrl = (appUrl: string, { week, by }: WeekView) => `${appUrl}/losses?week=${week}&by=${by}`;

function previewOf(words: SummaryWords): string {
  const net = words.sections[0]?.rows.find((row) => row.label === "Net loss");
  return net ? `Net loss ${net.value}` : words.period;
}
