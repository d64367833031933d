import type { FieldDescription } from "../../../core/formats/dataset.ts";
import { Ribbon } from "../ribbon/Ribbon.tsx";
import type { Numbers } from "../session/use-numbers.ts";
import { useSessionState } from "../session/use-session.tsx";
import { useSlow } from "../session/use-slow.ts";
import { fieldTitle } from "../text/field-name.ts";
import { bandText } from "../text/place-text.ts";
import { stepHeading } from "../text/step-name.ts";
import { EarlierIcon, LaterIcon, PlayIcon, StopIcon } from "./icons.tsx";
import { Trouble } from "./Trouble.tsx";
import type { Picture } from "./use-picture.ts";
import { useSize } from "./use-size.ts";

interface RibbonColumnProps {
  readonly field: FieldDescription;
  readonly numbers: Numbers;
  readonly picture: Picture;
  readonly isPlaying: boolean;
  onStep(step: number): void;
  onPlay(): void;
}

/** The day that is shown, and the longitude–time diagram by which it is chosen. */
export function RibbonColumn({ field, numbers, picture, isPlaying, onStep, onPlay }: RibbonColumnProps) {
  const { kept } = useSessionState();
  const box = useSize<HTMLDivElement>();
  const { ribbon, waves } = numbers;
  const isSlow = useSlow(ribbon.isWaiting);
  const { step } = kept.cursor;
  const steps = field.steps.values.length;
  const heading = stepHeading(field.steps, step);
  const departs = kept.waves.of === "anomaly" ? "anomaly" : "less its zonal mean";
  const shown = ribbon.value;
  return (
    <>
      <div className="date">
        <b data-testid="date">{heading.day}</b> <span>{heading.hour}</span>
        <span className="spring" />
        <button
          type="button"
          className="plain"
          aria-label="A step earlier"
          disabled={step <= 0}
          onClick={() => onStep(step - 1)}
        >
          <EarlierIcon />
        </button>
        <button
          type="button"
          className="plain"
          aria-label="A step later"
          disabled={step >= steps - 1}
          onClick={() => onStep(step + 1)}
        >
          <LaterIcon />
        </button>
        <button
          type="button"
          className="plain"
          aria-label={isPlaying ? "Stop" : "Run through time"}
          disabled={steps < 2}
          onClick={onPlay}
        >
          {isPlaying ? <StopIcon /> : <PlayIcon />}
        </button>
      </div>
      <p className="note">
        {fieldTitle(field)} {departs} along {bandText(kept.waves.band)}
      </p>
      <div className="ribbon-box" ref={box.ref} data-waiting={isSlow}>
        {ribbon.error !== null && (
          <Trouble title="The ribbon could not be read." words={ribbon.error} onRetry={ribbon.retry} />
        )}
        {/* Plotly waits for the first chart: it takes seconds to load. */}
        {shown !== null && picture.layers !== null && box.width > 0 && shown.field.key === field.key && (
          <Ribbon
            ribbon={shown}
            field={shown.field}
            of={kept.waves.of}
            shadingStep={picture.step}
            series={waves.value}
            step={step}
            lon={picture.cursor?.lon ?? kept.cursor.lon}
            theme={kept.theme}
            width={box.width}
            height={box.height}
            onStep={onStep}
          />
        )}
      </div>
    </>
  );
}
