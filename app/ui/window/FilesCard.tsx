import { Fragment, useState } from "react";
import { dayText } from "../../../core/field/calendar.ts";
import { QUANTITIES } from "../../../core/field/quantity.ts";
import type { FieldDescription, FileContents } from "../../../core/formats/dataset.ts";
import { recordsOf } from "../case/settled-case.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { numberText } from "../text/number-text.ts";
import { stepLine } from "../text/step-name.ts";
import { Card } from "./Card.tsx";
import { CorrectionForm } from "./CorrectionForm.tsx";

interface FilesProps {
  onClose(): void;
  onOpen(): void;
}

/** What was found in the open files, what it was taken for and why, and where the user knows better. */
export function FilesCard({ onClose, onOpen }: FilesProps) {
  const session = useSession();
  const { contents } = useSessionState();
  return (
    <Card title="Files" testId="card-files" onClose={onClose}>
      {contents.length === 0 && <p>No file is open.</p>}
      <RecordNotes />
      {contents.map((file) => (
        <FileSection key={file.file} file={file} />
      ))}
      <p className="row">
        <button type="button" onClick={onOpen}>
          Open files <kbd>O</kbd>
        </button>
        <button
          type="button"
          onClick={() => {
            onClose();
            void session.openSample();
          }}
        >
          Open the sample case
        </button>
      </p>
    </Card>
  );
}

/** What the open files make together: records, their gaps, and which of two files is used. */
function RecordNotes() {
  const { contents } = useSessionState();
  const { notes } = recordsOf(contents);
  if (notes.size === 0) return null;
  return (
    <section className="file" data-testid="records">
      <h3>Joined</h3>
      {[...notes].map(([key, words]) => (
        <div key={key}>
          {words.map((note) => (
            <p key={note} className="note">
              {note}
            </p>
          ))}
        </div>
      ))}
    </section>
  );
}

function levelsText(field: FieldDescription): string {
  const levels = Array.from(field.levels ?? []);
  if (levels.length === 0) return "no level";
  if (levels.length <= 6) return `${levels.join(", ")} hPa`;
  return `${levels.length} levels, ${Math.max(...levels)} to ${Math.min(...levels)} hPa`;
}

function stepsText({ steps }: FieldDescription): string {
  const n = steps.values.length;
  if (n === 1) return stepLine(steps, 0);
  const ends = `${stepLine(steps, 0)} to ${stepLine(steps, n - 1)}`;
  return `${n} steps, ${ends}`;
}

function membersText({ members }: FieldDescription): string {
  return members === null ? "" : `${members.length} member${members.length === 1 ? "" : "s"}, `;
}

function startText({ reference, steps }: FieldDescription): string {
  if (reference === null) return "";
  const { day, hour } = dayText(reference, steps.calendar);
  return `forecast from ${day} ${hour}; `;
}

function FileSection({ file }: { readonly file: FileContents }) {
  const session = useSession();
  const { kept } = useSessionState();
  const [asked, setAsked] = useState<string | null>(null);
  const said = (variable: string) =>
    kept.corrections.find((one) => one.file === file.file && one.variable === variable) ?? null;
  const about = [file.about.title, file.about.comment].filter(Boolean).join(". ");
  const form = (variable: string, units: string, hasLevels: boolean) =>
    asked === variable && (
      <tr className="correction">
        <td colSpan={4}>
          <CorrectionForm
            file={file.file}
            variable={variable}
            units={units}
            hasLevels={hasLevels}
            said={said(variable)}
            onDone={() => setAsked(null)}
          />
        </td>
      </tr>
    );
  const ask = (variable: string, words: string) => (
    <button
      type="button"
      aria-expanded={asked === variable}
      data-testid={`say-${variable}`}
      onClick={() => setAsked((old) => (old === variable ? null : variable))}
    >
      {words}
    </button>
  );
  return (
    <section className="file">
      <h3>
        {file.file}{" "}
        <span className="note">
          {file.format},{" "}
          {file.bytes < 1e5 ? `${numberText(file.bytes / 1e3, 1)} kB` : `${numberText(file.bytes / 1e6, 1)} MB`}
        </span>
        <button type="button" className="plain" onClick={() => void session.closeFile(file.file)}>
          Close file
        </button>
      </h3>
      {about !== "" && (
        <p className="note about" title={about}>
          {about}
        </p>
      )}
      <table className="fields">
        <tbody>
          {file.fields.map((field) => (
            <Fragment key={field.key}>
              <tr>
                <th scope="row">{field.variable}</th>
                <td>
                  {field.quantity === null ? (
                    <span className="left-out">not recognised</span>
                  ) : (
                    QUANTITIES[field.quantity].title
                  )}
                  <span className="note">{field.why}</span>
                </td>
                <td>
                  {levelsText(field)}
                  <span className="note">
                    {startText(field)}
                    {membersText(field)}
                    {stepsText(field)}; {field.grid.lat.length} × {field.grid.lon.length}
                  </span>
                </td>
                <td>{ask(field.variable, field.quantity === null ? "Say what it is" : "Change")}</td>
              </tr>
              {form(field.variable, field.unitsInFile, field.levels !== null)}
            </Fragment>
          ))}
          {file.leftOut.map(({ variable, why }) => (
            <Fragment key={variable}>
              <tr>
                <th scope="row">{variable}</th>
                <td colSpan={2} className="left-out">
                  left out: {why}
                </td>
                <td>{/units/.test(why) && ask(variable, "Say what it is")}</td>
              </tr>
              {form(variable, "", true)}
            </Fragment>
          ))}
        </tbody>
      </table>
      {file.notes.map((note) => (
        <p key={note} className="note">
          {note}
        </p>
      ))}
    </section>
  );
}
