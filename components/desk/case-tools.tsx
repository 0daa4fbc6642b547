"use client";
import { AXIS_INSET } from "../case/balance-axis";
import { Button } from "../ui/button";
import { KeyCap } from "./key-cap";
import { type Command, keyName, type Shortcuts } from "./key-table";
import { useKeyboardLayout } from "./use-keyboard-layout";

type CaseToolsProps = {
  shortcuts: Shortcuts;
  scoreHidden: boolean;
  onCommand: (command: Command) => void;
  onHelp: () => void;
};

/** Everything the single keys do, for hands on a mouse or a touch screen. */
export function CaseTools({ shortcuts, scoreHidden, onCommand, onHelp }: CaseToolsProps) {
  const layout = useKeyboardLayout();
  const words: readonly (readonly [Command, string])[] = [
    ["previous", "Previous"],
    ["next", "Put back, next"],
    ["wait", "Set aside"],
    ["escalate", "Escalate"],
    ["misuse", "Customer misuse"],
    ["note", "Note"],
    ["links", "Links"],
    ["score", scoreHidden ? "Show the score" : "Hide the score"],
  ];
  return (
    <div className={`${AXIS_INSET} flex flex-wrap items-center gap-x-4 gap-y-1`}>
      {words.map(([command, name]) => (
        <Button key={command} look="quiet" small className="px-0" onClick={() => onCommand(command)}>
          <KeyCap name={shortcuts.singleKeys ? keyName(shortcuts.bindings[command], layout) : null} />
          {name}
        </Button>
      ))}
      <Button look="quiet" small className="px-0" onClick={onHelp}>
        <KeyCap name={shortcuts.singleKeys ? "?" : null} />
        Shortcuts
      </Button>
    </div>
  );
}
