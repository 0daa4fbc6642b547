/** What a single key does on the Desk; the words are those of the shortcut list. */
export const COMMANDS = {
  escalate: "Escalate to a supervisor",
  previous: "Previous case",
  next: "Put back and take the next case",
  wait: "Set aside until a time",
  score: "Hide or show the score",
  links: "Go to the links",
  note: "Write a note",
  misuse: "Customer misuse: sure, unsure, off",
} as const;
export type Command = keyof typeof COMMANDS;

/** Physical keys (`KeyboardEvent.code`), so that a hand finds them in the same place on every layout. */
export type Bindings = Readonly<Record<Command, string>>;

export const DEFAULT_BINDINGS: Bindings = {
  escalate: "KeyQ",
  previous: "KeyW",
  next: "KeyE",
  wait: "KeyA",
  score: "KeyS",
  links: "KeyD",
  note: "KeyF",
  misuse: "KeyM",
};

/** Keys with a fixed meaning on the Desk or in the browser. */
const FIXED =
  /^(Arrow(Left|Right|Up|Down)|Enter|NumpadEnter|Escape|Tab|Space|Backspace|(Digit|Numpad)\d|(Shift|Control|Alt|Meta)(Left|Right)|F\d+)$/;

export class KeyTaken extends Error {
  constructor(
    readonly code: string,
    readonly by: string,
  ) {
    super(`${keyName(code)} is already bound: ${by}`);
    this.name = "KeyTaken";
  }
}

/** Which command each key gives. @throws KeyTaken when a key would mean two things */
export function keyTable(bindings: Bindings): ReadonlyMap<string, Command> {
  const table = new Map<string, Command>();
  for (const command of Object.keys(COMMANDS) as Command[]) {
    const code = bindings[command];
    if (FIXED.test(code)) throw new KeyTaken(code, "it has a fixed meaning");
    const other = table.get(code);
    if (other) throw new KeyTaken(code, COMMANDS[other]);
    table.set(code, command);
  }
  return table;
}

/** @throws KeyTaken */
export function rebind(bindings: Bindings, command: Command, code: string): Bindings {
  const holder = keyTable(bindings).get(code);
  if (holder && holder !== command) throw new KeyTaken(code, COMMANDS[holder]);
  const changed = { ...bindings, [command]: code };
  keyTable(changed);
  return changed;
}

export type Shortcuts = { singleKeys: boolean; bindings: Bindings };
export const DEFAULT_SHORTCUTS: Shortcuts = { singleKeys: true, bindings: DEFAULT_BINDINGS };

/** Shortcuts as this browser kept them; whatever cannot be read or no longer fits gives the defaults. */
export function readShortcuts(stored: string | null): Shortcuts {
  if (stored === null) return DEFAULT_SHORTCUTS;
  try {
    const kept = JSON.parse(stored) as Partial<Shortcuts>;
    const bindings = { ...DEFAULT_BINDINGS };
    for (const command of Object.keys(COMMANDS) as Command[]) {
      const code: unknown = kept.bindings?.[command];
      if (typeof code === "string") bindings[command] = code;
    }
    keyTable(bindings);
    return { singleKeys: kept.singleKeys !== false, bindings };
  } catch {
    return DEFAULT_SHORTCUTS;
  }
}

/** The number a typology key stands for, from 1 to 9, or null. */
export function digitOf(code: string): number | null {
  const digit = /^(?:Digit|Numpad)([1-9])$/.exec(code)?.[1];
  return digit === undefined ? null : Number(digit);
}

/** What is printed on the key; `layout` (where the browser tells it) gives the letter of the person's own keyboard. */
export function keyName(code: string, layout?: ReadonlyMap<string, string> | null): string {
  const printed = layout?.get(code);
  if (printed) return printed.toUpperCase();
  return code.replace(/^(Key|Digit)/, "").replace(/([a-z])([A-Z])/g, "$1 $2");
}
