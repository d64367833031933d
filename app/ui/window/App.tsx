import { type DragEvent, useCallback, useEffect, useRef, useState } from "react";
import { withChart, withMove, withStep, withTheme, withTurn, withTurnToCursor, withWavesOf } from "../case/actions.ts";
import { caseText } from "../case/case-text.ts";
import { waveSpan } from "../case/step-span.ts";
import { waveRecipe } from "../case/wave-recipe.ts";
import { useNumbers } from "../session/use-numbers.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { stepLine } from "../text/step-name.ts";
import { cssVariables } from "../theme/tokens.ts";
import { BackgroundCard } from "./BackgroundCard.tsx";
import { CaseBar } from "./CaseBar.tsx";
import { BandCard, ExportCard, KeysCard, MethodCard } from "./cards.tsx";
import { type CommandName, commandOf } from "./commands.ts";
import { cursorWords } from "./cursor-words.ts";
import { download, fileStem } from "./download.ts";
import { type ExportKind, exported, tableOf } from "./exports.ts";
import { FilesCard } from "./FilesCard.tsx";
import { Foot } from "./Foot.tsx";
import { Notices } from "./Notices.tsx";
import { Rail } from "./Rail.tsx";
import { RibbonColumn } from "./RibbonColumn.tsx";
import { Stage } from "./Stage.tsx";
import { usePicture } from "./use-picture.ts";

export type CardName = "keys" | "method" | "files" | "export" | "band" | "background" | "open";

const PLAY_MS = 160;
const COPIED_MS = 1500;

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
  const { field, waves, frame } = numbers;
  useTheme(kept.theme);
  useEffect(() => {
    document.title = field === null ? "Isohypse" : `${kept.title} – Isohypse`;
  }, [field, kept.title]);
  const nSteps = field?.steps.values.length ?? 0;

  const open = useCallback(async () => {
    setCard(null);
    if (!(await session.chooseFiles())) fileInput.current?.click();
  }, [session]);
  const save = useCallback(
    () => download(`${fileStem(kept.title)}.case.json`, caseText(kept), "application/json"),
    [kept],
  );
  const copy = (): void => {
    if (field === null) return;
    const csv = tableOf(kept, field, picture);
    navigator.clipboard.writeText(csv).then(
      () => {
        setCopied(true);
        setTimeout(() => setCopied(false), COPIED_MS);
      },
      () => download(`${fileStem(kept.title)}-waves.csv`, csv, "text/csv"),
    );
  };
  const exportAs = (what: ExportKind): void => {
    setCard(null);
    if (field === null) return;
    const recipe = waveRecipe(kept, field, waves.value?.span ?? waveSpan(field.steps, numbers.span));
    exported(what, kept, field, picture, recipe, state.version).then(
      (made) => {
        if (made !== null) download(`${fileStem(kept.title)}${made.suffix}`, made.content, made.type);
      },
      (error: unknown) =>
        session.report("The picture was not made.", error instanceof Error ? error.message : String(error)),
    );
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
      case "field":
      case "background":
      case "latitude":
      case "of":
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
      const target = event.target instanceof Element ? event.target : null;
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
        <Stage numbers={numbers} picture={picture} onCard={setCard} onCopy={copy} />
      )}
      <aside className="ribbon-column">
        {field !== null && (
          <RibbonColumn
            field={field}
            numbers={numbers}
            picture={picture}
            isPlaying={playing}
            onStep={goTo}
            onPlay={() => run("play")}
          />
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
      {card === "background" && field !== null && <BackgroundCard steps={field.steps} onClose={() => setCard(null)} />}
      {card === "band" && <BandCard onClose={() => setCard(null)} />}
      {card === "export" && <ExportCard onClose={() => setCard(null)} onExport={exportAs} />}
      {card === "method" && field !== null && (
        <MethodCard
          series={waves.value}
          field={field}
          when={stepLine(field.steps, kept.cursor.step)}
          atCursor={cursorWords(picture, field.units)}
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
