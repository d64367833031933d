import { type FieldDescription, filesOf } from "../../../core/formats/dataset.ts";
import {
  withBackground,
  withBand,
  withField,
  withLevel,
  withMember,
  withTheme,
  withTitle,
  withWavesOf,
} from "../case/actions.ts";
import { usableFields } from "../case/settled-case.ts";
import { useSession, useSessionState } from "../session/use-session.tsx";
import { fieldEntry } from "../text/field-name.ts";
import { bandText } from "../text/place-text.ts";
import type { CardName } from "./App.tsx";
import { BackgroundChoice, backgroundName } from "./BackgroundChoice.tsx";
import { KeyButton } from "./KeyButton.tsx";

interface CaseBarProps {
  readonly field: FieldDescription | null;
  onCard(card: CardName): void;
  onSave(): void;
}

/** True if the files say of themselves that their data are invented. */
export function isInvented(about: Readonly<Record<string, string>>): boolean {
  return /\binvented\b/i.test(`${about.title ?? ""} ${about.comment ?? ""}`);
}

const BANDS: readonly (readonly [number, number])[] = [
  [40, 40],
  [45, 45],
  [50, 50],
  [55, 55],
  [60, 60],
  [65, 65],
  [70, 70],
  [30, 50],
  [40, 60],
  [45, 65],
  [50, 60],
  [50, 70],
  [55, 65],
  [60, 70],
];

/** What is open, and what of it is looked at. */
export function CaseBar({ field, onCard, onSave }: CaseBarProps) {
  const session = useSession();
  const { kept, contents } = useSessionState();
  const fields = usableFields(contents);
  const invented =
    field !== null && contents.some(({ file, about }) => filesOf(field).includes(file) && isInvented(about));
  const south = kept.chart.hemisphere === "south";
  const bands = BANDS.map(([a, b]) => (south ? ([-b, -a] as const) : ([a, b] as const)));
  const known = bands.some(([a, b]) => a === kept.waves.band[0] && b === kept.waves.band[1]);
  const isNamedTwice = (one: FieldDescription): boolean =>
    one.quantity !== null && fields.filter(({ quantity }) => quantity === one.quantity).length > 1;
  const several = new Set(fields.map(({ file }) => file)).size > 1;
  return (
    <header className="case-bar">
      <div className="brand" aria-hidden="true">
        <svg
          width="24"
          height="24"
          viewBox="0 0 24 24"
          fill="none"
          stroke="currentColor"
          strokeWidth="1.6"
          aria-hidden="true"
        >
          <path d="M12 2c6 0 9 3 9 8 0 7-4 12-9 12S3 17 3 10c0-5 3-8 9-8Z" />
          <path d="M12 6c3.600 0 5.500 1.800 5.500 4.800 0 4-2.400 7.200-5.500 7.200s-5.500-3.200-5.500-7.200C6.500 7.800 8.400 6 12 6Z" />
          <path d="M12 10c1.500 0 2.200.7 2.200 1.800 0 1.500-1 2.500-2.200 2.500s-2.200-1-2.200-2.500c0-1.100.7-1.800 2.200-1.800Z" />
        </svg>
        Isohypse
      </div>
      <label className="choice">
        <span>Case</span>
        <input
          key={kept.title}
          defaultValue={kept.title}
          size={Math.max(8, Math.min(18, kept.title.length))}
          aria-label="Title of the case"
          onKeyDown={(event) => {
            if (event.key === "Enter") event.currentTarget.blur();
          }}
          onBlur={(event) => session.act((now) => withTitle(now, event.target.value))}
        />
      </label>
      <div className="choice">
        <span>Files{invented && <em className="tag">invented</em>}</span>
        <button
          type="button"
          className="value"
          data-testid="do-files"
          onClick={() => onCard("files")}
          title="What was found in the files (F)"
        >
          {contents.length === 0 ? "none open" : contents.length === 1 ? contents[0]?.file : `${contents.length} files`}
        </button>
      </div>
      {field !== null && (
        <>
          <label className="choice">
            <span>Field</span>
            <select
              id="choose-field"
              value={field.key}
              data-testid="choose-field"
              onChange={(event) => session.act((now) => withField(now, event.target.value))}
            >
              {fields.map((one) => (
                <option key={one.key} value={one.key}>
                  {fieldEntry(one)}
                  {several ? ` (${one.file})` : isNamedTwice(one) ? ` (${one.variable})` : ""}
                </option>
              ))}
            </select>
          </label>
          {field.levels !== null && (
            <label className="choice">
              <span>Level</span>
              <select
                id="choose-level"
                value={String(kept.level)}
                data-testid="choose-level"
                onChange={(event) => session.act((now) => withLevel(now, Number(event.target.value)))}
              >
                {Array.from(field.levels, (level) => (
                  <option key={level} value={String(level)}>
                    {level} hPa
                  </option>
                ))}
              </select>
            </label>
          )}
          {field.members !== null && (
            <label className="choice">
              <span>Member</span>
              <select
                id="choose-member"
                value={String(kept.member)}
                data-testid="choose-member"
                onChange={(event) => session.act((now) => withMember(now, Number(event.target.value)))}
              >
                {field.members.map((member) => (
                  <option key={member} value={String(member)}>
                    {member}
                  </option>
                ))}
              </select>
            </label>
          )}
          <BackgroundChoice
            key={backgroundName(kept.background)}
            background={kept.background}
            steps={field.steps}
            onChange={(background) => session.act((now) => withBackground(now, background))}
            onOther={() => onCard("background")}
          />
          <label className="choice">
            <span>Latitude</span>
            <select
              id="choose-latitude"
              data-testid="choose-latitude"
              value={kept.waves.band.join(" ")}
              onChange={(event) => {
                if (event.target.value === "other") return onCard("band");
                const [a, b] = event.target.value.split(" ").map(Number) as [number, number];
                session.act((now) => withBand(now, [a, b]));
              }}
            >
              {!known && <option value={kept.waves.band.join(" ")}>{bandText(kept.waves.band)}</option>}
              {bands.map((band) => (
                <option key={band.join(" ")} value={band.join(" ")}>
                  {bandText(band)}
                </option>
              ))}
              <option value="other">other …</option>
            </select>
          </label>
          {kept.background.kind !== "none" && (
            <label className="choice">
              <span>Waves of</span>
              <select
                id="choose-of"
                data-testid="choose-of"
                value={kept.waves.of}
                onChange={(event) =>
                  session.act((now) => withWavesOf(now, event.target.value === "field" ? "field" : "anomaly"))
                }
              >
                <option value="anomaly">the anomaly</option>
                <option value="field">the field</option>
              </select>
            </label>
          )}
        </>
      )}
      <nav className="bar-actions">
        <KeyButton command="open" onPress={() => onCard("open")}>
          Open
        </KeyButton>
        <KeyButton command="save" onPress={onSave}>
          Save
        </KeyButton>
        <KeyButton command="export" onPress={() => onCard("export")}>
          Export
        </KeyButton>
        <KeyButton
          command="theme"
          onPress={() => session.act((now) => withTheme(now, now.theme === "light" ? "night" : "light"))}
        >
          {kept.theme === "light" ? "Night" : "Day"}
        </KeyButton>
        <KeyButton command="keys" onPress={() => onCard("keys")}>
          Keys
        </KeyButton>
      </nav>
    </header>
  );
}
