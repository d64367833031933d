import type { ReactNode } from "react";

/** Drawn signs: the type family has no arrows. */
function Icon({ children }: { readonly children: ReactNode }) {
  return (
    <svg className="icon" width="16" height="16" viewBox="0 0 16 16" aria-hidden="true">
      {children}
    </svg>
  );
}

export const EarlierIcon = () => (
  <Icon>
    <path d="M14 8H2.5M7 3.5 2.5 8 7 12.5" />
  </Icon>
);
export const LaterIcon = () => (
  <Icon>
    <path d="M2 8h11.5M9 3.5 13.5 8 9 12.5" />
  </Icon>
);
export const PlayIcon = () => (
  <Icon>
    <path d="M4 2.5v11L13 8Z" />
  </Icon>
);
export const StopIcon = () => (
  <Icon>
    <path d="M3.5 3.5h9v9h-9Z" />
  </Icon>
);
/** Turn with the clock, as the sheet lies. */
export const TurnRightIcon = () => (
  <Icon>
    <path d="M12.6 5.2A5.3 5.3 0 1 0 13.3 9M13 1.8v3.7H9.3" />
  </Icon>
);
export const TurnLeftIcon = () => (
  <Icon>
    <path d="M3.4 5.2A5.3 5.3 0 1 1 2.7 9M3 1.8v3.7h3.7" />
  </Icon>
);
