import { expect, test } from "vitest";
import { COMMANDS, commandOf } from "../../../../app/ui/window/commands.ts";

const press = (key: string, held: Partial<Record<"ctrlKey" | "metaKey" | "altKey", boolean>> = {}) => ({
  key,
  ctrlKey: false,
  metaKey: false,
  altKey: false,
  ...held,
});

test("no two commands share a key", () => {
  const keys = Object.values(COMMANDS).map(({ key }) => key);
  expect(new Set(keys).size).toBe(keys.length);
});

test("every command is reached by its key, in either case of a letter", () => {
  for (const [name, { key }] of Object.entries(COMMANDS)) {
    expect(commandOf(press(key), false)).toBe(name);
    if (/^[a-z]$/.test(key)) expect(commandOf(press(key.toUpperCase()), false)).toBe(name);
  }
  expect(commandOf(press("q"), false)).toBe(null);
});

test("while text is typed only Escape is a command", () => {
  for (const { key } of Object.values(COMMANDS))
    expect(commandOf(press(key), true)).toBe(key === "Escape" ? "close" : null);
});

test("the system's own keys are left to it, but for save and open", () => {
  expect(commandOf(press("s", { ctrlKey: true }), true)).toBe("save");
  expect(commandOf(press("o", { metaKey: true }), false)).toBe("open");
  expect(commandOf(press("c", { ctrlKey: true }), false)).toBe(null);
  expect(commandOf(press("f", { ctrlKey: true }), false)).toBe(null);
  expect(commandOf(press("ArrowLeft", { altKey: true }), false)).toBe(null);
});
