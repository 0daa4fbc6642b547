import { CHANNELS_WITHOUT_HOLD } from "@/lib/policy/codes";
import { CHANNELS, type Channel } from "@/lib/transactions/codes";
import { Field, Input, Select } from "../ui/field";
import { CHANNEL_WORDS } from "../words";
import type { Draft } from "./draft";
import { AT_EXPIRY_WORDS, ON_HOLD_WORDS } from "./terms";

type ChannelFieldsProps = {
  draft: Draft;
  errorAt: (path: string) => string | undefined;
  onChange: (path: string, value: string) => void;
};

/** What the sender is told about a payment above the hold line, channel by channel. */
export function ChannelFields(props: ChannelFieldsProps) {
  return (
    <fieldset className="border-t border-rule pt-4">
      <legend className="float-left w-full font-strong">Above the hold line, by channel</legend>
      <p className="clear-both mb-3 text-small text-soft">
        Some payments can be held for a while, others only refused or let go.
      </p>
      <div className="grid gap-x-8 gap-y-5 md:grid-cols-2">
        {CHANNELS.map((channel) => (
          <ChannelRuleFields key={channel} channel={channel} {...props} />
        ))}
      </div>
    </fieldset>
  );
}

function ChannelRuleFields({ channel, draft, errorAt, onChange }: ChannelFieldsProps & { channel: Channel }) {
  const path = (rule: string) => `channels.${channel}.${rule}`;
  const textOf = (rule: string) => draft[path(rule)] ?? "";
  const choices = Object.entries(ON_HOLD_WORDS).filter(
    ([code]) => code !== "hold" || !CHANNELS_WITHOUT_HOLD.includes(channel) || textOf("onHold") === "hold",
  );
  return (
    <fieldset>
      <legend className="mb-1 text-small font-strong">{CHANNEL_WORDS[channel]}</legend>
      <div className="grid gap-3 sm:grid-cols-[1fr_auto_1fr]">
        <Field label="Payment" error={errorAt(path("onHold"))}>
          <Select value={textOf("onHold")} onChange={(event) => onChange(path("onHold"), event.target.value)}>
            {options(choices)}
          </Select>
        </Field>
        {textOf("onHold") === "hold" && (
          <>
            <Field label="For" error={errorAt(path("holdMinutes"))}>
              <Input
                inputMode="numeric"
                autoComplete="off"
                unit="min"
                className="w-20 text-right"
                value={textOf("holdMinutes")}
                onChange={(event) => onChange(path("holdMinutes"), event.target.value)}
              />
            </Field>
            <Field label="Undecided at the end" error={errorAt(path("atExpiry"))}>
              <Select
                value={textOf("atExpiry")}
                onChange={(event) => onChange(path("atExpiry"), event.target.value)}
              >
                {options(Object.entries(AT_EXPIRY_WORDS))}
              </Select>
            </Field>
          </>
        )}
      </div>
    </fieldset>
  );
}

const options = (words: readonly (readonly [string, string])[]) =>
  words.map(([code, name]) => (
    <option key={code} value={code}>
      {name}
    </option>
  ));
