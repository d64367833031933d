/** Everything that can be done by a key: one list for the keyboard, the bars and the card of keys. */
export interface Command {
  readonly key: string;
  /** Key cap on the screen. */
  readonly cap: string;
  readonly words: string;
}

export const COMMANDS = {
  west: { key: "ArrowLeft", cap: "←", words: "cursor west" },
  east: { key: "ArrowRight", cap: "→", words: "cursor east" },
  north: { key: "ArrowUp", cap: "↑", words: "cursor north" },
  south: { key: "ArrowDown", cap: "↓", words: "cursor south" },
  earlier: { key: ",", cap: ",", words: "a step earlier" },
  later: { key: ".", cap: ".", words: "a step later" },
  first: { key: "Home", cap: "Home", words: "first step" },
  last: { key: "End", cap: "End", words: "last step" },
  play: { key: " ", cap: "Space", words: "run through time, and stop" },
  pattern: { key: "1", cap: "1", words: "the question Pattern" },
  chart: { key: "h", cap: "H", words: "hemisphere or belt" },
  side: { key: "g", cap: "G", words: "northern or southern side" },
  turnWest: { key: "[", cap: "[", words: "turn the chart 15° west" },
  turnEast: { key: "]", cap: "]", words: "turn the chart 15° east" },
  turnCursor: { key: "t", cap: "T", words: "turn the chart to the cursor" },
  shading: { key: "a", cap: "A", words: "anomaly or field" },
  method: { key: "m", cap: "M", words: "method card" },
  copy: { key: "c", cap: "C", words: "copy the numbers as CSV" },
  files: { key: "f", cap: "F", words: "files: what was found in them" },
  open: { key: "o", cap: "O", words: "open files" },
  save: { key: "s", cap: "S", words: "save the case" },
  export: { key: "e", cap: "E", words: "export" },
  field: { key: "v", cap: "V", words: "choose the field" },
  level: { key: "l", cap: "L", words: "choose the level" },
  background: { key: "b", cap: "B", words: "choose the background" },
  latitude: { key: "k", cap: "K", words: "choose the latitude" },
  of: { key: "w", cap: "W", words: "choose what the waves are of" },
  theme: { key: "n", cap: "N", words: "night or day" },
  keys: { key: "?", cap: "?", words: "this list" },
  close: { key: "Escape", cap: "Esc", words: "close a card; cancel what runs" },
} as const satisfies Record<string, Command>;

export type CommandName = keyof typeof COMMANDS;

/** The command of a key press; null for none, and while text is typed or a system key is held. */
export function commandOf(
  event: Pick<KeyboardEvent, "key" | "ctrlKey" | "metaKey" | "altKey">,
  isTyping: boolean,
): CommandName | null {
  const names = Object.keys(COMMANDS) as CommandName[];
  const key = event.key.length === 1 ? event.key.toLowerCase() : event.key;
  if (event.ctrlKey || event.metaKey) return key === "s" ? "save" : key === "o" ? "open" : null;
  if (event.altKey) return null;
  if (isTyping) return key === "Escape" ? "close" : null;
  return names.find((name) => COMMANDS[name].key === key) ?? null;
}
