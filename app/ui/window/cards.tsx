import { useState } from "react";
import type { OptionSpec, OptionValue } from "../../../core/diagnostics/entry.ts";
import type { FieldDescription } from "../../../core/formats/dataset.ts";
import { diagnosticOf } from "../../../core/recipe/catalogue.ts";
import { withBand } from "../case/actions.ts";
import type { WaveSeries } from "../reading/wave-series.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { backgroundName } from "./BackgroundChoice.tsx";
import { Card } from "./Card.tsx";
import { COMMANDS, type CommandName } from "./commands.ts";

interface CloseProps {
  onClose(): void;
}

export function KeysCard({ onClose }: CloseProps) {
  return (
    <Card title="Keys" testId="card-keys" onClose={onClose}>
      <dl className="keys">
        {(Object.keys(COMMANDS) as CommandName[]).map((name) => (
          <div key={name}>
            <dt>
              <kbd>{COMMANDS[name].cap}</kbd>
            </dt>
            <dd>{COMMANDS[name].words}</dd>
          </div>
        ))}
      </dl>
      <p className="note">
        Pulled with Shift held, the polar chart turns. On the ribbon, a click or a pull goes to that time.
      </p>
    </Card>
  );
}

interface MethodProps extends CloseProps {
  readonly series: WaveSeries | null;
  readonly field: FieldDescription;
  readonly when: string;
  readonly atCursor: readonly string[];
  onCopy(): void;
}

/** An option in force in words; null for one that asks for nothing. */
function optionText(option: OptionSpec, value: OptionValue): string | null {
  if (value === null) return null;
  const units = option.units?.replace("degrees_north", "°N").replace(/^days$/, " days") ?? "";
  const choice = option.kind === "choice" ? option.choices.find((one) => one.value === value)?.title : undefined;
  const rounded = (one: unknown): unknown => (typeof one === "number" ? Number(one.toPrecision(6)) : one);
  const [first, last] = (Array.isArray(value) ? value : [value, value]).map(rounded);
  const text = choice ?? (first === last ? String(first) : `${first} to ${last}`);
  return `${option.title.toLowerCase()} ${text}${units}`;
}

export function MethodCard({ series, field, when, atCursor, onClose, onCopy }: MethodProps) {
  const { kept } = useSessionState();
  const method = diagnosticOf("zonal-waves");
  const options = series?.result.options ?? {};
  return (
    <Card title={method.title} note={method.id} testId="card-method" onClose={onClose}>
      <p>{method.summary}</p>
      {/* biome-ignore lint/security/noDangerouslySetInnerHtml: the catalogue's own MathML */}
      <math display="block" dangerouslySetInnerHTML={{ __html: method.formula }} />
      <dl className="facts">
        <dt>options</dt>
        <dd>
          {method.options
            .flatMap((option) => optionText(option, options[option.name] ?? option.default) ?? [])
            .join("; ")}
          ; background: {backgroundName(kept.background)}
        </dd>
        <dt>valid</dt>
        <dd>{method.validity}</dd>
        <dt>source</dt>
        <dd>{method.sources.join(". ")}.</dd>
        <dt>data</dt>
        <dd>
          {field.file}, {field.variable}: {field.why}; {when}
        </dd>
        <dt>at cursor</dt>
        <dd>
          {atCursor.map((words) => (
            <div key={words}>{words}</div>
          ))}
        </dd>
        {(series?.result.notes.length ?? 0) > 0 && (
          <>
            <dt>notes</dt>
            <dd>{series?.result.notes.join(" ")}</dd>
          </>
        )}
      </dl>
      <p>
        <button type="button" onClick={onCopy}>
          Copy as CSV <kbd>C</kbd>
        </button>
      </p>
    </Card>
  );
}

export function BandCard({ onClose }: CloseProps) {
  const session = useSession();
  const { kept } = useSessionState();
  const [ends, setEnds] = useState([String(kept.waves.band[0]), String(kept.waves.band[1])]);
  const [south, north] = ends.map(Number) as [number, number];
  const isGood =
    [south, north].every((value) => Number.isFinite(value) && Math.abs(value) <= 90) &&
    ends.every((end) => end.trim() !== "");
  return (
    <Card title="Latitude of the waves" testId="card-band" onClose={onClose}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          if (!isGood) return;
          session.act((now) => withBand(now, [south, north]));
          onClose();
        }}
      >
        <p className="note">
          Degrees north, south negative. Equal ends mean the nearest row; else the rows between are averaged by area
          before the waves are taken.
        </p>
        <p className="ends">
          {["from", "to"].map((word, i) => (
            <label key={word}>
              {word}{" "}
              <input
                inputMode="decimal"
                size={6}
                value={ends[i]}
                data-testid={`band-${word}`}
                onChange={(event) => setEnds((old) => old.map((end, j) => (j === i ? event.target.value : end)))}
              />
            </label>
          ))}
          <button type="submit" disabled={!isGood}>
            Set
          </button>
        </p>
        {!isGood && <p className="error-words">Two latitudes from −90 to 90 are needed.</p>}
      </form>
    </Card>
  );
}

interface ExportProps extends CloseProps {
  onExport(what: "png" | "svg" | "csv" | "recipe"): void;
}

export function ExportCard({ onClose, onExport }: ExportProps) {
  const rows = [
    ["png", "Chart as PNG", "with its caption and where its numbers come from"],
    ["svg", "Chart as SVG", "the same, lines and letters as such"],
    ["csv", "Waves as CSV", "the table of this step in full digits"],
    ["recipe", "Recipe", "what npm run batch computes again, to the same numbers"],
  ] as const;
  return (
    <Card title="Export" testId="card-export" onClose={onClose}>
      <ul className="exports">
        {rows.map(([what, name, words]) => (
          <li key={what}>
            <button type="button" data-testid={`export-${what}`} onClick={() => onExport(what)}>
              {name}
            </button>{" "}
            {words}
          </li>
        ))}
      </ul>
    </Card>
  );
}
