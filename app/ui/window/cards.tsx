import { useState } from "react";
import { QUANTITIES, type Quantity } from "../../../core/field/quantity.ts";
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
  readonly atCursor: string;
  onCopy(): void;
}

function optionText(value: unknown): string {
  if (value === null) return "none";
  return Array.isArray(value) ? value.join(" to ") : String(value);
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
            .map((option) => `${option.title.toLowerCase()}: ${optionText(options[option.name] ?? option.default)}`)
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
        <dd>{atCursor}</dd>
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

interface FilesProps extends CloseProps {
  onOpen(): void;
}

export function FilesCard({ onClose, onOpen }: FilesProps) {
  const session = useSession();
  const { contents } = useSessionState();
  return (
    <Card title="Files" testId="card-files" onClose={onClose}>
      {contents.length === 0 && <p>No file is open.</p>}
      {contents.map((file) => (
        <section key={file.file} className="file">
          <h3>
            {file.file}{" "}
            <span className="note">
              {file.format}, {(file.bytes / 1e6).toFixed(1)} MB
            </span>
            <button type="button" className="plain" onClick={() => void session.closeFile(file.file)}>
              Close file
            </button>
          </h3>
          {(file.about.title ?? file.about.comment) !== undefined && (
            <p className="note">{[file.about.title, file.about.comment].filter(Boolean).join(". ")}</p>
          )}
          <table className="fields">
            <tbody>
              {file.fields.map((field) => (
                <tr key={field.key}>
                  <th scope="row">{field.variable}</th>
                  <td>{field.quantity === null ? <WhatIsIt field={field} /> : QUANTITIES[field.quantity].title}</td>
                  <td>{field.why}</td>
                  <td>
                    {field.grid.lat.length} × {field.grid.lon.length}
                    {field.levels === null ? "" : `, ${Array.from(field.levels).join(", ")} hPa`},{" "}
                    {field.steps.values.length} {field.steps.kind === "time" ? "times" : field.steps.name}
                  </td>
                </tr>
              ))}
              {file.leftOut.map(({ variable, why }) => (
                <tr key={variable} className="left-out">
                  <th scope="row">{variable}</th>
                  <td>left out</td>
                  <td colSpan={2}>{why}</td>
                </tr>
              ))}
            </tbody>
          </table>
          {file.notes.map((note) => (
            <p key={note} className="note">
              {note}
            </p>
          ))}
        </section>
      ))}
      <p>
        <button type="button" onClick={onOpen}>
          Open files <kbd>O</kbd>
        </button>{" "}
        <button type="button" onClick={() => void session.openSample()}>
          Open the sample case
        </button>
      </p>
    </Card>
  );
}

const SI_UNITS: Readonly<Record<Quantity, string>> = {
  geopotential_height: "m",
  eastward_wind: "m s-1",
  northward_wind: "m s-1",
  air_temperature: "K",
};

/** Where the user says what an unrecognised variable is. */
function WhatIsIt({ field }: { readonly field: FieldDescription }) {
  const session = useSession();
  return (
    <select
      aria-label={`What ${field.variable} is`}
      defaultValue=""
      data-testid={`what-is-${field.variable}`}
      onChange={(event) => {
        const quantity = event.target.value as Quantity;
        const units = field.unitsInFile === "" ? { units: SI_UNITS[quantity] } : {};
        void session.correct({ file: field.file, variable: field.variable, quantity, ...units });
      }}
    >
      <option value="" disabled>
        not recognised: it is …
      </option>
      {(Object.keys(QUANTITIES) as Quantity[]).map((quantity) => (
        <option key={quantity} value={quantity}>
          {QUANTITIES[quantity].title}
        </option>
      ))}
    </select>
  );
}
