import { useState } from "react";
import { ShareBars } from "../bars/ShareBars.tsx";
import { withChart, withPlace, withTurn, withWavesOf } from "../case/actions.ts";
import { Chart } from "../chart/Chart.tsx";
import { WaveDials } from "../dials/WaveDials.tsx";
import { AmplitudePlot } from "../plots/AmplitudePlot.tsx";
import type { Numbers } from "../session/use-numbers.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { useSlow } from "../session/use-slow.ts";
import { digitsOf, signedText, unitText } from "../text/number-text.ts";
import { bandText } from "../text/place-text.ts";
import type { CardName } from "./App.tsx";
import { TurnLeftIcon, TurnRightIcon } from "./icons.tsx";
import { KeyButton } from "./KeyButton.tsx";
import { Trouble } from "./Trouble.tsx";
import type { Picture } from "./use-picture.ts";
import { useSize } from "./use-size.ts";
import { WaveTable } from "./WaveTable.tsx";

interface StageProps {
  readonly numbers: Numbers;
  readonly picture: Picture;
  onCard(card: CardName): void;
  onCopy(): void;
}

/** The question's answer: a sentence, the chart, and what stands beside it. */
export function Stage({ numbers, picture, onCard, onCopy }: StageProps) {
  const session = useSession();
  const { kept } = useSessionState();
  const [picked, setPicked] = useState<number | null>(null);
  const chartBox = useSize<HTMLDivElement>();
  const sideBox = useSize<HTMLDivElement>();
  const plotBox = useSize<HTMLDivElement>();
  const dialBox = useSize<HTMLDivElement>();
  const { field, frame, waves, background } = numbers;
  const { layers, bars, cursor, readings, dials } = picture;
  const chosen = picked ?? picture.leader;
  const units = field?.units ?? "";
  const along = bandText(kept.waves.band);
  const waveWords = waves.error;
  const frameSlow = useSlow(frame.isWaiting || background.isWaiting);
  const wavesSlow = useSlow(waves.isWaiting);
  const { chart } = kept;
  if (field === null) return null;
  const isMissing = waves.value !== null && !waves.isWaiting && picture.headline === null;
  const silence =
    waveWords !== null
      ? "This field has no zonal waves"
      : isMissing
        ? `No waves along ${along}: values are missing there`
        : `Computing the waves along ${along} …`;
  const isSingle = field.steps.values.length < 2;
  return (
    <main className="stage">
      <div className="stage-head">
        <h1 aria-live="polite" data-testid="headline" data-waiting={waves.isWaiting}>
          {picture.headline?.main ?? silence}
        </h1>
        <KeyButton command="method" onPress={() => onCard("method")}>
          Method
        </KeyButton>
        <KeyButton command="copy" onPress={onCopy}>
          Numbers
        </KeyButton>
      </div>
      <p className="second" data-failed={waveWords !== null}>
        {waveWords ?? picture.headline?.second ?? (isMissing ? "Choose another latitude, level or step." : "")}
        {waveWords !== null && (
          <button type="button" className="plain again" onClick={waves.retry}>
            Try again
          </button>
        )}
      </p>
      <div className="stage-body">
        <div className="chart-column">
          <div className="chart-box" ref={chartBox.ref}>
            {frame.error !== null && (
              <Trouble
                title="This step could not be read."
                words={frame.error}
                testId="frame-error"
                onRetry={frame.retry}
              />
            )}
            {frame.error === null && background.error !== null && (
              <Trouble title="There is no such background." words={background.error} onRetry={background.retry} />
            )}
            {frameSlow && <Computing words={frame.isWaiting ? "Reading the step" : "Fitting the background"} />}
            {layers !== null && chartBox.width > 0 && (
              <Chart
                view={picture.view}
                layers={layers}
                theme={kept.theme}
                width={chartBox.width}
                height={chartBox.height}
                isWaiting={frame.error !== null || (frameSlow && frame.isWaiting)}
                onCursor={(lat, lon) => session.act((now) => withPlace(now, lat, lon, field))}
                onTurn={(turn) => session.act((now) => withChart(now, { turn }))}
              />
            )}
          </div>
          <div className="chart-controls" role="toolbar" aria-label="Chart">
            <Segments
              label="Chart"
              value={chart.kind}
              options={[
                ["hemisphere", "Polar"],
                ["belt", "Belt"],
              ]}
              onChange={(kind) => session.act((now) => withChart(now, { kind: kind as "belt" }))}
            />
            <Segments
              label="Side"
              value={chart.hemisphere}
              options={[
                ["north", "North"],
                ["south", "South"],
              ]}
              onChange={(hemisphere) => session.act((now) => withChart(now, { hemisphere: hemisphere as "north" }))}
            />
            {kept.background.kind !== "none" && (
              <Segments
                label="Shading"
                value={chart.shading}
                options={[
                  ["anomaly", "Anomaly"],
                  ["field", "Field"],
                ]}
                onChange={(shading) =>
                  session.act((now) => withWavesOf(withChart(now, { shading: shading as "field" }), shading as "field"))
                }
              />
            )}
            <span className="turns">
              <button type="button" aria-label="Turn 15° west" onClick={() => session.act((now) => withTurn(now, -15))}>
                <TurnLeftIcon />
              </button>
              <button type="button" aria-label="Turn 15° east" onClick={() => session.act((now) => withTurn(now, 15))}>
                <TurnRightIcon />
              </button>
            </span>
          </div>
        </div>
        <div className="side" ref={sideBox.ref}>
          <h2>
            What makes{" "}
            {cursor === null || Number.isNaN(cursor.sum)
              ? "the value"
              : `${signedText(cursor.sum, digitsOf(units))} ${unitText(units)}`}{" "}
            at the cursor
          </h2>
          {cursor?.of === "zonal-mean" && <p className="note">departure from the zonal mean</p>}
          {bars.length > 0 && cursor !== null && sideBox.width > 0 ? (
            <ShareBars
              shares={bars}
              total={cursor.sum}
              units={unitText(units)}
              theme={kept.theme}
              width={sideBox.width}
            />
          ) : (
            <p className="note">{cursor?.whyNot ?? ""}</p>
          )}
          <h2>{field.steps.kind === "time" ? "Amplitude, last 20 days" : `Amplitude by ${field.steps.name}`}</h2>
          <div className="plot-box" ref={plotBox.ref}>
            {isSingle && <p className="note">This record has one step.</p>}
            {waves.value !== null && layers !== null && !isSingle && plotBox.width > 0 && (
              <AmplitudePlot
                series={waves.value}
                steps={field.steps}
                step={frame.value?.step ?? kept.cursor.step}
                units={units}
                theme={kept.theme}
                width={plotBox.width}
                height={plotBox.height}
                chosen={chosen}
              />
            )}
          </div>
          <h2>
            Waves along {along}
            {kept.waves.of === "field" ? "" : ", anomaly"}
          </h2>
          <div style={{ opacity: wavesSlow ? 0.4 : 1 }}>
            <WaveTable readings={readings} units={units} theme={kept.theme} chosen={chosen} onChoose={setPicked} />
          </div>
        </div>
      </div>
      <div className="dials-box" ref={dialBox.ref}>
        <div className="dials-head">
          <h2>Wave dials</h2>
          <span className="note">
            hand: amplitude and ridge, turned as the chart; trail: last 10 days; small circle: the background’s wave;
            tick: the cursor
          </span>
        </div>
        {dials.length > 0 && dialBox.width > 0 && (
          <WaveDials
            waves={dials}
            units={unitText(units)}
            theme={kept.theme}
            turn={chart.kind === "hemisphere" ? chart.turn : 0}
            cursorLon={cursor?.lon ?? kept.cursor.lon}
            chosen={chosen}
            largest={picture.largest}
            width={dialBox.width}
            onChoose={setPicked}
          />
        )}
      </div>
    </main>
  );
}

/** Over a picture that is being made anew: the old one stays below, dimmed. */
function Computing({ words }: { readonly words: string }) {
  const { tasks } = useSessionState();
  const task = tasks.at(-1);
  return (
    <div className="computing" role="status">
      <i style={{ width: `${Math.round(100 * (task?.done ?? 0))}%` }} />
      <span>{words} …</span>
    </div>
  );
}

interface SegmentsProps {
  readonly label: string;
  readonly value: string;
  readonly options: readonly (readonly [value: string, words: string])[];
  onChange(value: string): void;
}

function Segments({ label, value, options, onChange }: SegmentsProps) {
  return (
    <fieldset className="segments" aria-label={label}>
      {options.map(([option, words]) => (
        <button
          type="button"
          key={option}
          aria-pressed={option === value}
          data-testid={`segment-${option}`}
          onClick={() => onChange(option)}
        >
          {words}
        </button>
      ))}
    </fieldset>
  );
}
