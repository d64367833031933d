import { type ReactNode, useState } from "react";
import type { BackgroundSpec } from "../../../core/background/spec.ts";
import { DataError } from "../../../core/errors.ts";
import type { StepAxis } from "../../../core/field/axes.ts";
import { isoText } from "../../../core/field/calendar.ts";
import { stepsOfPeriod } from "../../../core/field/period.ts";
import { withBackground } from "../case/actions.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { Card } from "./Card.tsx";

const MOST_HARMONICS = 12;
const LONGEST_WINDOW = 3660; // days

type Kind = BackgroundSpec["kind"];

/** What is typed, before it is known to make sense. */
interface Entries {
  readonly kind: Kind;
  readonly from: string;
  readonly to: string;
  readonly harmonics: string;
  readonly days: string;
}

function endText(steps: StepAxis, index: number): string {
  const value = steps.values[index];
  return steps.kind === "time" ? isoText(value, steps.calendar).slice(0, 10) : String(value);
}

function entriesOf(spec: BackgroundSpec, steps: StepAxis): Entries {
  return {
    kind: spec.kind,
    from: spec.kind === "period-mean" ? spec.from : endText(steps, 0),
    to: spec.kind === "period-mean" ? spec.to : endText(steps, steps.values.length - 1),
    harmonics: spec.kind === "annual-cycle" ? String(spec.harmonics) : "4",
    days: spec.kind === "running-mean" ? String(spec.days) : "15",
  };
}

/** @throws DataError in words where the entries make no background of this record. */
function specOf({ kind, from, to, harmonics, days }: Entries, steps: StepAxis): BackgroundSpec {
  switch (kind) {
    case "none":
    case "record-mean":
      return { kind };
    case "period-mean":
      stepsOfPeriod(steps, [from, to]);
      return { kind, from: from.trim(), to: to.trim() };
    case "annual-cycle": {
      const count = Number(harmonics);
      if (!(Number.isInteger(count) && count >= 1 && count <= MOST_HARMONICS))
        throw new DataError("OptionError", `A whole number of harmonics from 1 to ${MOST_HARMONICS} is needed.`);
      return { kind, harmonics: count };
    }
    case "running-mean": {
      const length = Number(days);
      if (!(length > 0 && length <= LONGEST_WINDOW))
        throw new DataError("OptionError", `A number of days above 0 and at most ${LONGEST_WINDOW} is needed.`);
      return { kind, days: length };
    }
  }
}

interface BackgroundCardProps {
  readonly steps: StepAxis;
  onClose(): void;
}

/** Every background there is, with its own numbers. */
export function BackgroundCard({ steps, onClose }: BackgroundCardProps) {
  const session = useSession();
  const { kept } = useSessionState();
  const [entries, setEntries] = useState(() => entriesOf(kept.background, steps));
  const change = (some: Partial<Entries>): void => setEntries((old) => ({ ...old, ...some }));
  let spec: BackgroundSpec | null = null;
  let words = "";
  try {
    spec = specOf(entries, steps);
  } catch (error) {
    words = error instanceof Error ? error.message : String(error);
  }
  const isTime = steps.kind === "time";
  const line = (kind: Kind, name: string, rest: ReactNode = null, whyNot: string | null = null) => (
    <div className="choice-line" data-disabled={whyNot !== null}>
      <label>
        <input
          type="radio"
          name="background"
          checked={entries.kind === kind}
          disabled={whyNot !== null}
          data-testid={`background-${kind}`}
          onChange={() => change({ kind })}
        />
        {name}
      </label>
      {whyNot === null ? rest : <span className="left-out">{whyNot}</span>}
    </div>
  );
  const entry = (kind: Kind, key: "from" | "to" | "harmonics" | "days", size: number, label: string) => (
    <input
      aria-label={label}
      size={size}
      value={entries[key]}
      data-testid={`background-${key}`}
      onFocus={() => change({ kind })}
      onChange={(event) => change({ kind, [key]: event.target.value })}
    />
  );
  const needsTime = isTime ? null : `needs times; this record steps along ${steps.name}`;
  return (
    <Card title="Background" testId="card-background" onClose={onClose}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          if (spec === null) return;
          const chosen = spec;
          session.act((now) => withBackground(now, chosen));
          onClose();
        }}
      >
        <p className="note">What anomalies are departures from. Without one, departures are from the zonal mean.</p>
        {line("none", "none")}
        {line(
          "record-mean",
          "mean of the whole record",
          null,
          steps.values.length > 1 ? null : "this record has one step",
        )}
        {line(
          "period-mean",
          "mean from",
          <>
            {entry("period-mean", "from", 12, "first step of the mean")} to{" "}
            {entry("period-mean", "to", 12, "last step of the mean")} <span className="note">both included</span>
          </>,
        )}
        {line(
          "annual-cycle",
          "annual cycle of",
          <>{entry("annual-cycle", "harmonics", 3, "harmonics of the year")} harmonics</>,
          needsTime,
        )}
        {line(
          "running-mean",
          "centred running mean over",
          <>{entry("running-mean", "days", 5, "days of the running mean")} days</>,
          needsTime,
        )}
        {words !== "" && <p className="error-words">{words}</p>}
        <p>
          <button type="submit" disabled={spec === null}>
            Set
          </button>
        </p>
      </form>
    </Card>
  );
}
