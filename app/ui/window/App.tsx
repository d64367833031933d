import { type DragEvent, useCallback, useEffect, useRef, useState } from "react";
import { withChart, withMove, withStep, withTheme, withTurn, withTurnToCursor, withWavesOf } from "../case/actions.ts";
import { caseText } from "../case/case-text.ts";
import { waveRecipe } from "../case/wave-recipe.ts";
import { chartPng, chartSvg } from "../chart/export-chart.ts";
import { Ribbon } from "../ribbon/Ribbon.tsx";
import { useNumbers } from "../session/use-numbers.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { digitsOf, signedText, unitText } from "../text/number-text.ts";
import { bandText, latitudeText, longitudeText } from "../text/place-text.ts";
import { stepHeading, stepLine } from "../text/step-name.ts";
import { cssVariables } from "../theme/tokens.ts";
import { backgroundName } from "./BackgroundChoice.tsx";
import { CaseBar } from "./CaseBar.tsx";
import { BandCard, ExportCard, FilesCard, KeysCard, MethodCard } from "./cards.tsx";
import { type CommandName, commandOf } from "./commands.ts";
import { download, fileStem } from "./download.ts";
import { Foot } from "./Foot.tsx";
import { Notices } from "./Notices.tsx";
import { Rail } from "./Rail.tsx";
import { Stage } from "./Stage.tsx";
import { usePicture } from "./use-picture.ts";
import { useSize } from "./use-size.ts";
import { waveCsv } from "./wave-csv.ts";

export type CardName = "keys" | "method" | "files" | "export" | "band" | "open";

const PLAY_MS = 160;

/** Colours of the theme, put on the page. */
function useTheme(theme: "light" | "night"): void {
  useEffect(() => {
    const root = document.documentElement;
    for (const [name, value] of Object.entries(cssVariables(theme))) root.style.setProperty(name, value);
    root.dataset.theme = theme;
  }, [theme]);
}

export function App() {
  const session = useSession();
  const state = useSessionState();
  const { kept, contents, isStarting, awaited } = state;
  const numbers = useNumbers(state);
  const picture = usePicture(kept, numbers);
  const [card, setCard] = useState<CardName | null>(null);
  const [playing, setPlaying] = useState(false);
  const [isOver, setIsOver] = useState(false);
  const [copied, setCopied] = useState(false);
  const fileInput = useRef<HTMLInputElement>(null);
  const ribbonBox = useSize<HTMLDivElement>();
  useTheme(kept.theme);
  const { field } = numbers;
  const nSteps = field?.steps.values.length ?? 0;
  // Plotly waits for the first chart: it takes seconds to load.
  const isReady = picture.layers !== null;

  const open = useCallback(async () => {
    setCard(null);
    if (!(await session.chooseFiles())) fileInput.current?.click();
  }, [session]);
  const save = useCallback(
    () => download(`${fileStem(kept.title)}.case.json`, caseText(kept), "application/json"),
    [kept],
  );
  const csv = (): string =>
    field === null
      ? ""
      : waveCsv(picture.readings, stepLine(field.steps, kept.cursor.step), bandText(kept.waves.band), field.units);
  const copy = (): void => {
    void navigator.clipboard.writeText(csv()).then(
      () => {
        setCopied(true);
        setTimeout(() => setCopied(false), 1500);
      },
      () => download(`${fileStem(kept.title)}-waves.csv`, csv(), "text/csv"),
    );
  };
  const notes = (): string[] =>
    field === null
      ? []
      : [
          picture.headline?.main ?? "",
          `${field.file}, ${field.variable} (${field.why}); background: ${backgroundName(kept.background)}. Isohypse ${state.version}.`,
          "Guidance, not a warning. Warnings and their wording are the responsible national service’s and a licensed forecaster’s.",
        ];
  const exportAs = (what: "png" | "svg" | "csv" | "recipe"): void => {
    const stem = fileStem(kept.title);
    setCard(null);
    if (field === null) return;
    if (what === "csv") download(`${stem}-waves.csv`, csv(), "text/csv");
    else if (what === "recipe")
      download(
        `${stem}.recipe.json`,
        `${JSON.stringify(waveRecipe(kept, field, numbers.waves.value?.span ?? numbers.span), null, 2)}\n`,
        "application/json",
      );
    else if (picture.layers !== null) {
      const [width, height] = kept.chart.kind === "hemisphere" ? [640, 640] : [960, 460];
      if (what === "svg")
        download(
          `${stem}-chart.svg`,
          chartSvg(picture.view, picture.layers, kept.theme, width as number, height as number, notes()),
          "image/svg+xml",
        );
      else
        void chartPng(picture.view, picture.layers, kept.theme, width as number, height as number, notes()).then(
          (blob) => download(`${stem}-chart.png`, blob),
          (error: unknown) => session.report("The picture was not made.", String(error)),
        );
    }
  };
  const goTo = useCallback((step: number) => session.act((now) => withStep(now, step, nSteps)), [session, nSteps]);

  const run = (command: CommandName): void => {
    const { step } = kept.cursor;
    switch (command) {
      case "west":
      case "east":
        if (field !== null) session.act((now) => withMove(now, 0, command === "east" ? 1 : -1, field));
        break;
      case "north":
      case "south":
        if (field !== null) session.act((now) => withMove(now, command === "north" ? 1 : -1, 0, field));
        break;
      case "earlier":
        goTo(step - 1);
        break;
      case "later":
        goTo(step + 1);
        break;
      case "first":
        goTo(0);
        break;
      case "last":
        goTo(nSteps - 1);
        break;
      case "play":
        setPlaying((now) => !now && nSteps > 1);
        break;
      case "pattern":
        break;
      case "chart":
        session.act((now) => withChart(now, { kind: now.chart.kind === "belt" ? "hemisphere" : "belt" }));
        break;
      case "side":
        session.act((now) => withChart(now, { hemisphere: now.chart.hemisphere === "north" ? "south" : "north" }));
        break;
      case "turnWest":
      case "turnEast":
        session.act((now) => withTurn(now, command === "turnEast" ? 15 : -15));
        break;
      case "turnCursor":
        session.act(withTurnToCursor);
        break;
      case "shading":
        session.act((now) => {
          if (now.background.kind === "none") return now;
          const shading = now.chart.shading === "anomaly" ? "field" : "anomaly";
          return withWavesOf(withChart(now, { shading }), shading);
        });
        break;
      case "copy":
        copy();
        break;
      case "open":
        void open();
        break;
      case "save":
        save();
        break;
      case "level":
      case "background":
      case "latitude":
        document.getElementById(`choose-${command}`)?.focus();
        break;
      case "theme":
        session.act((now) => withTheme(now, now.theme === "light" ? "night" : "light"));
        break;
      case "close":
        setPlaying(false);
        if (card !== null) setCard(null);
        else for (const { task } of state.tasks) void session.cancel(task);
        break;
      default:
        setCard((now) => (now === command ? null : command));
    }
  };
  const newest = useRef(run);
  newest.current = run;
  useEffect(() => {
    const press = (event: KeyboardEvent): void => {
      const target = event.target as HTMLElement | null;
      const isTyping =
        target !== null && (target.matches("input, textarea") || (target.matches("select") && event.key !== "Escape"));
      const command = commandOf(event, isTyping);
      if (command === null || (event.key === " " && target?.matches("button"))) return;
      event.preventDefault();
      newest.current(command);
    };
    addEventListener("keydown", press);
    return () => removeEventListener("keydown", press);
  }, []);
  useEffect(() => {
    if (!playing) return;
    const timer = setInterval(() => {
      const { step } = session.state().kept.cursor;
      if (step >= nSteps - 1) setPlaying(false);
      else goTo(step + 1);
    }, PLAY_MS);
    return () => clearInterval(timer);
  }, [playing, session, nSteps, goTo]);
  useEffect(() => {
    const leave = (): void => void session.flush();
    addEventListener("pagehide", leave);
    return () => removeEventListener("pagehide", leave);
  }, [session]);

  const drop = (event: DragEvent): void => {
    event.preventDefault();
    setIsOver(false);
    void session.openFiles([...event.dataTransfer.files]);
  };
  const heading = field === null ? null : stepHeading(field.steps, kept.cursor.step);
  const { ribbon, waves, frame } = numbers;
  return (
    // biome-ignore lint/a11y/noStaticElementInteractions: the whole window takes dropped files; the button does the same by key
    <div
      className="window"
      onDragOver={(event) => {
        event.preventDefault();
        setIsOver(true);
      }}
      onDragLeave={(event) => {
        if (event.relatedTarget === null) setIsOver(false);
      }}
      onDrop={drop}
    >
      <input
        ref={fileInput}
        type="file"
        multiple
        hidden
        data-testid="file-input"
        onChange={(event) => {
          const files = [...(event.target.files ?? [])];
          event.target.value = "";
          void session.openFiles(files);
        }}
      />
      <CaseBar field={field} onCard={(name) => (name === "open" ? void open() : setCard(name))} onSave={save} />
      <Rail picture={picture} theme={kept.theme} isWaiting={waves.isWaiting || frame.isWaiting} />
      {field === null ? (
        <main className="stage">
          {!isStarting && awaited.length === 0 && (
            <div className="empty">
              <b>No field is open</b>
              <span>Drop a netCDF file here, or open one with O.</span>
              <button type="button" onClick={() => void session.openSample()}>
                Open the sample case
              </button>
            </div>
          )}
        </main>
      ) : (
        <Stage numbers={numbers} picture={picture} isReady={isReady} onCard={setCard} onCopy={copy} />
      )}
      <aside className="ribbon-column">
        {field !== null && heading !== null && (
          <>
            <div className="date">
              <b data-testid="date">{heading.day}</b> <span>{heading.hour}</span>
              <span className="spring" />
              <button
                type="button"
                className="plain"
                aria-label="A step earlier"
                onClick={() => goTo(kept.cursor.step - 1)}
              >
                ←
              </button>
              <button
                type="button"
                className="plain"
                aria-label="A step later"
                onClick={() => goTo(kept.cursor.step + 1)}
              >
                →
              </button>
              <button
                type="button"
                className="plain"
                aria-label={playing ? "Stop" : "Run through time"}
                onClick={() => run("play")}
              >
                {playing ? "■" : "▷"}
              </button>
            </div>
            <p className="note">
              {field.quantity === "geopotential_height" ? "Height" : field.longName}
              {kept.waves.of === "anomaly" ? " anomaly" : ", departure from the zonal mean,"} along{" "}
              {bandText(kept.waves.band)}
            </p>
            <div className="ribbon-box" ref={ribbonBox.ref}>
              {ribbon.error !== null && <p className="error-words">{ribbon.error}</p>}
              {ribbon.value !== null && isReady && ribbonBox.width > 0 && ribbon.value.field.key === field.key && (
                <Ribbon
                  ribbon={ribbon.value}
                  field={ribbon.value.field}
                  of={kept.waves.of}
                  shadingStep={picture.step}
                  series={waves.value}
                  step={kept.cursor.step}
                  lon={picture.cursor?.lon ?? kept.cursor.lon}
                  theme={kept.theme}
                  width={ribbonBox.width}
                  height={ribbonBox.height}
                  onStep={goTo}
                />
              )}
            </div>
          </>
        )}
      </aside>
      <Foot />
      <Notices onOpen={() => void open()} />
      {isOver && <div className="drop">Drop files to open them; a case file opens the case</div>}
      {copied && (
        <output className="copied" data-testid="copied">
          Numbers copied
        </output>
      )}
      {card === "keys" && <KeysCard onClose={() => setCard(null)} />}
      {card === "files" && <FilesCard onClose={() => setCard(null)} onOpen={() => void open()} />}
      {card === "band" && <BandCard onClose={() => setCard(null)} />}
      {card === "export" && <ExportCard onClose={() => setCard(null)} onExport={exportAs} />}
      {card === "method" && field !== null && (
        <MethodCard
          series={waves.value}
          field={field}
          when={stepLine(field.steps, kept.cursor.step)}
          atCursor={
            picture.cursor === null
              ? "nothing"
              : `${latitudeText(picture.cursor.lat)} ${longitudeText(picture.cursor.lon, 1)}: ${signedText(picture.cursor.sum, digitsOf(field.units))} ${unitText(field.units)}; ${picture.bars.map(({ label, value }) => `${label} ${signedText(value, digitsOf(field.units))}`).join(", ")}`
          }
          onClose={() => setCard(null)}
          onCopy={copy}
        />
      )}
      <output hidden data-testid="files-open">
        {contents.length}
      </output>
    </div>
  );
}
