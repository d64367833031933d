import type { BackgroundSpec } from "../../../core/background/spec.ts";
import type { StepAxis } from "../../../core/field/axes.ts";
import { isoText } from "../../../core/field/calendar.ts";

interface BackgroundChoiceProps {
  readonly background: BackgroundSpec;
  readonly steps: StepAxis;
  onChange(background: BackgroundSpec): void;
  /** The card with every background and its numbers is asked for. */
  onOther(): void;
}

/** What a background is called on the screen. */
export function backgroundName(background: BackgroundSpec): string {
  switch (background.kind) {
    case "none":
      return "none";
    case "record-mean":
      return "record mean";
    case "period-mean":
      return `mean ${background.from.slice(0, 10)} to ${background.to.slice(0, 10)}`;
    case "annual-cycle":
      return `annual cycle, ${background.harmonics} harmonics`;
    case "running-mean":
      return `running mean, ${background.days} days`;
  }
}

function choices(steps: StepAxis): readonly BackgroundSpec[] {
  const n = steps.values.length;
  const always: BackgroundSpec[] = n > 1 ? [{ kind: "record-mean" }] : [];
  if (steps.kind !== "time" || n < 3) return [{ kind: "none" }, ...always];
  const end = (index: number): string => isoText(steps.values[index] as number, steps.calendar).slice(0, 10);
  const third = Math.floor(n / 3);
  const days = (steps.values[n - 1] as number) - (steps.values[0] as number);
  return [
    { kind: "none" },
    ...always,
    { kind: "period-mean", from: end(0), to: end(third) },
    { kind: "period-mean", from: end(n - 1 - third), to: end(n - 1) },
    ...([9, 15, 31] as const)
      .filter((length) => length < days)
      .map((length) => ({ kind: "running-mean", days: length }) as const),
    ...(days > 300 ? ([2, 4] as const).map((harmonics) => ({ kind: "annual-cycle", harmonics }) as const) : []),
  ];
}

/** What anomalies depart from. */
export function BackgroundChoice({ background, steps, onChange, onOther }: BackgroundChoiceProps) {
  const offered = choices(steps);
  const text = JSON.stringify(background);
  const all = offered.some((one) => JSON.stringify(one) === text) ? offered : [...offered, background];
  return (
    <label className="choice">
      <span>Background</span>
      <select
        id="choose-background"
        data-testid="choose-background"
        value={text}
        onChange={(event) =>
          event.target.value === "other" ? onOther() : onChange(JSON.parse(event.target.value) as BackgroundSpec)
        }
      >
        {all.map((one) => (
          <option key={JSON.stringify(one)} value={JSON.stringify(one)}>
            {backgroundName(one)}
          </option>
        ))}
        <option value="other">other …</option>
      </select>
    </label>
  );
}
