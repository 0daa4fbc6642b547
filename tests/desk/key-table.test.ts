import { describe, expect, it } from "vitest";
import {
  COMMANDS,
  DEFAULT_BINDINGS,
  DEFAULT_SHORTCUTS,
  digitOf,
  KeyTaken,
  keyName,
  keyTable,
  readShortcuts,
  rebind,
} from "@/components/desk/key-table";

describe("the table of keys", () => {
  it("gives every command one key", () => {
    const table = keyTable(DEFAULT_BINDINGS);
    expect([...table.values()].sort()).toEqual(Object.keys(COMMANDS).sort());
    expect(table.get("KeyF")).toBe("note");
    expect(table.get("KeyQ")).toBe("escalate");
  });

  it("throws when a key would mean two things, and names the other", () => {
    expect(() => keyTable({ ...DEFAULT_BINDINGS, wait: "KeyE" })).toThrow(KeyTaken);
    expect(() => rebind(DEFAULT_BINDINGS, "wait", "KeyF")).toThrow("F is already bound: Write a note");
  });

  it.each([
    "ArrowLeft",
    "Enter",
    "NumpadEnter",
    "Escape",
    "Tab",
    "Space",
    "Digit1",
    "Numpad9",
    "ShiftLeft",
    "F5",
  ])("keeps the fixed key %s out of other hands", (code) => {
    expect(() => rebind(DEFAULT_BINDINGS, "note", code)).toThrow(KeyTaken);
  });

  it("binds a command anew and frees its old key", () => {
    const changed = rebind(DEFAULT_BINDINGS, "note", "KeyX");
    expect(keyTable(changed).get("KeyX")).toBe("note");
    expect(keyTable(changed).has("KeyF")).toBe(false);
    expect(keyTable(rebind(changed, "links", "KeyF")).get("KeyF")).toBe("links");
  });
});

describe("shortcuts kept in the browser", () => {
  it("come back as they were", () => {
    const kept = { singleKeys: false, bindings: rebind(DEFAULT_BINDINGS, "note", "KeyX") };
    expect(readShortcuts(JSON.stringify(kept))).toEqual(kept);
  });

  it.each([
    ["nothing kept", null],
    ["not JSON", "{"],
    ["another shape", "null"],
    ["a key bound twice", JSON.stringify({ bindings: { note: "KeyE" } })],
    ["a fixed key", JSON.stringify({ bindings: { note: "Enter" } })],
  ])("are the defaults for %s", (_, stored) => {
    expect(readShortcuts(stored)).toEqual(DEFAULT_SHORTCUTS);
  });

  it("give a command that was not known then its default key", () => {
    expect(readShortcuts(JSON.stringify({ bindings: { note: "KeyX" } })).bindings).toEqual({
      ...DEFAULT_BINDINGS,
      note: "KeyX",
    });
  });
});

describe("names of keys", () => {
  it("are those of the place on the keyboard, or of the person's own layout where it is known", () => {
    expect(keyName("KeyQ")).toBe("Q");
    expect(keyName("KeyQ", new Map([["KeyQ", "a"]]))).toBe("A");
    expect(keyName("BracketLeft")).toBe("Bracket Left");
  });

  it("count the digits from 1 to 9 of both blocks", () => {
    expect(digitOf("Digit1")).toBe(1);
    expect(digitOf("Numpad9")).toBe(9);
    expect(digitOf("Digit0")).toBeNull();
    expect(digitOf("KeyA")).toBeNull();
  });
});
