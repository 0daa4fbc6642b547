"use client";
import { useEffect, useRef } from "react";
import { AXIS_INSET } from "../case/balance-axis";
import { type Marker, MISUSE, STOPS } from "./marker";

const STOP_WORDS: Record<(typeof STOPS)[number], { verdict: string; confidence: string }> = {
  legitimate_sure: { verdict: "Legitimate", confidence: "sure" },
  legitimate_unsure: { verdict: "Legitimate", confidence: "unsure" },
  none: { verdict: "No finding", confidence: "" },
  fraudulent_unsure: { verdict: "Fraudulent", confidence: "unsure" },
  fraudulent_sure: { verdict: "Fraudulent", confidence: "sure" },
};

type StopsProps = { caseNumber: number; marker: Marker; onMarker: (marker: Marker) => void };

/** The five-stop marker along the balance, a radio group to a screen reader; customer misuse stands beside it. */
export function Stops({ caseNumber, marker, onMarker }: StopsProps) {
  const group = useRef<HTMLFieldSetElement>(null);
  // The arrow keys move the marker from anywhere on the case; a focus inside the group goes with it.
  useEffect(() => {
    if (!group.current?.contains(document.activeElement)) return;
    group.current.querySelector<HTMLInputElement>(`input[value="${marker}"]`)?.focus();
  }, [marker]);
  return (
    <fieldset ref={group} className={`${AXIS_INSET} h-12 sm:h-9`}>
      <legend className="sr-only">Finding on case {caseNumber}</legend>
      <span aria-hidden="true" className="absolute inset-x-[10%] top-2 border-t border-edge" />
      {STOPS.map((stop, index) => (
        <Stop
          key={stop}
          stop={stop}
          percent={10 + index * 20}
          checked={marker === stop}
          onChoose={() => onMarker(stop)}
        />
      ))}
      {MISUSE.map((stop) => (
        <label key={stop} className="sr-only">
          <input
            type="radio"
            name="finding"
            value={stop}
            tabIndex={marker === stop ? 0 : -1}
            checked={marker === stop}
            onChange={() => onMarker(stop)}
          />
          Customer misuse, {stop === "misuse_sure" ? "sure" : "unsure"}
        </label>
      ))}
    </fieldset>
  );
}

const TONES: Record<(typeof STOPS)[number], string> = {
  legitimate_sure: "peer-checked:text-verdigris-ink",
  legitimate_unsure: "peer-checked:text-verdigris-ink",
  none: "",
  fraudulent_unsure: "peer-checked:text-ochre-ink",
  fraudulent_sure: "peer-checked:text-ochre-ink",
};

type StopProps = {
  stop: (typeof STOPS)[number];
  percent: number;
  checked: boolean;
  onChoose: () => void;
};

function Stop({ stop, percent, checked, onChoose }: StopProps) {
  const { verdict, confidence } = STOP_WORDS[stop];
  return (
    <label
      className="absolute top-0 flex w-1/5 -translate-x-1/2 cursor-pointer flex-col items-center"
      style={{ left: `${percent}%` }}
    >
      <input
        type="radio"
        name="finding"
        value={stop}
        checked={checked}
        onChange={onChoose}
        className="peer absolute inset-x-0 top-0 h-4 w-full cursor-pointer opacity-0"
      />
      <span
        aria-hidden="true"
        className="my-[3px] size-2.5 rotate-45 border border-edge bg-paper outline-offset-3 peer-checked:scale-150 peer-checked:border-accent peer-checked:bg-accent peer-focus-visible:outline-2 peer-focus-visible:outline-accent"
      />
      <span className={`text-center text-small text-soft peer-checked:font-strong ${TONES[stop]}`}>
        {verdict}
        {confidence && (
          <span className="block leading-3.5 sm:inline sm:before:content-[',_']">{confidence}</span>
        )}
      </span>
    </label>
  );
}
