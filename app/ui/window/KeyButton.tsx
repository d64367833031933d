import type { ReactNode } from "react";
import { COMMANDS, type CommandName } from "./commands.ts";

interface KeyButtonProps {
  readonly command: CommandName;
  readonly children: ReactNode;
  readonly pressed?: boolean;
  onPress(): void;
}

/** A button that says its key. */
export function KeyButton({ command, children, pressed = false, onPress }: KeyButtonProps) {
  const { cap, words } = COMMANDS[command];
  return (
    <button
      type="button"
      className="key-button"
      aria-pressed={pressed}
      aria-keyshortcuts={COMMANDS[command].key}
      title={words}
      data-testid={`do-${command}`}
      onClick={onPress}
    >
      {children} <kbd>{cap}</kbd>
    </button>
  );
}
