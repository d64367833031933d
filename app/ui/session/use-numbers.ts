import { DataError } from "../../../core/errors.ts";
import type { IndexRange } from "../../../core/field/axes.ts";
import { type FieldDescription, type FileContents, filesOf } from "../../../core/formats/dataset.ts";
import type { FieldPlace, Frame, Ribbon } from "../../worker/desk.ts";
import { chosenFieldOf, levelIndexOf } from "../case/settled-case.ts";
import { ribbonSpan, waveSpan } from "../case/step-span.ts";
import { waveRecipe } from "../case/wave-recipe.ts";
import { WaveSeries } from "../reading/wave-series.ts";
import type { SessionState } from "./session-state.ts";
import { type Answer, useAnswer } from "./use-answer.ts";
import { useSession } from "./use-session.tsx";

/** Numbers together with what they are numbers of, so that an old answer is never read with a new grid. */
export interface FrameAt {
  readonly field: FieldDescription;
  readonly step: number;
  readonly frame: Frame;
}
export interface RibbonOf {
  readonly field: FieldDescription;
  readonly span: IndexRange;
  readonly band: readonly [number, number];
  readonly ribbon: Ribbon;
}

/** Everything that the window draws of the chosen field. */
export interface Numbers {
  readonly field: FieldDescription | null;
  readonly level: number;
  readonly span: IndexRange;
  readonly frame: Answer<FrameAt>;
  readonly background: Answer<boolean>;
  readonly ribbon: Answer<RibbonOf>;
  readonly waves: Answer<WaveSeries>;
}

const ids = new WeakMap<FileContents, number>();
let lastId = 0;

/** A number that changes when a file is read anew, so that nothing old is taken for new. */
function contentsId(contents: FileContents | undefined): number {
  if (contents === undefined) return 0;
  const held = ids.get(contents);
  if (held !== undefined) return held;
  lastId += 1;
  ids.set(contents, lastId);
  return lastId;
}

/** Old numbers may stay on the screen while they are of the same place. */
function isSamePlace(oldKey: string, newKey: string): boolean {
  return oldKey.split("|")[0] === newKey.split("|")[0];
}

export function useNumbers({ kept, contents }: SessionState): Numbers {
  const { desk } = useSession();
  const field = chosenFieldOf(kept, contents);
  const level = field === null ? 0 : levelIndexOf(kept, field);
  const place: FieldPlace = { key: field?.key ?? "", level, member: kept.member };
  const files = field === null ? [] : filesOf(field);
  const revision = files.map((name) => contentsId(contents.find(({ file }) => file === name))).join(" ");
  const placeKey = field === null ? null : JSON.stringify([place.key, level, place.member, revision]);
  const { background } = kept;
  const backgroundKey = JSON.stringify(background);
  const step = field === null ? 0 : Math.min(kept.cursor.step, field.steps.values.length - 1);
  const [from, to] = field === null ? [0, 0] : ribbonSpan(field.steps, step);
  const span: IndexRange = [from, to];
  const { band, of } = kept.waves;

  // The first picture waits for nothing; the passes over the record start once it is there.
  const fit = useAnswer<boolean>(
    placeKey === null || background.kind === "none" ? null : `${placeKey}|${backgroundKey}`,
    async (task) => {
      await desk.prepareBackground(place, background, task);
      return true;
    },
    true,
    (oldKey, newKey) => oldKey.split(" #")[0] === newKey.split(" #")[0],
  );
  const isFitted = fit.value === true;
  const frame = useAnswer<FrameAt>(
    placeKey === null ? null : `${placeKey}|${step} ${backgroundKey} ${isFitted}`,
    async () => ({ field: field as FieldDescription, step, frame: await desk.frame(place, step, background) }),
    false,
    isSamePlace,
  );
  const hasPicture = frame.value !== null || frame.error !== null;
  const ribbon = useAnswer<RibbonOf>(
    placeKey === null || !hasPicture ? null : `${placeKey}|${from} ${to} ${band} ${backgroundKey}`,
    async (task) => ({
      field: field as FieldDescription,
      span,
      band,
      ribbon: await desk.ribbon(place, band, span, background, task),
    }),
    true,
    isSamePlace,
  );
  const waves = useAnswer<WaveSeries>(
    placeKey === null || !hasPicture ? null : `${placeKey}|${from} ${to} ${band} ${backgroundKey} ${of}`,
    async (task) => {
      const described = field as FieldDescription;
      const covered = waveSpan(described.steps, span);
      const outcome = await desk.runRecipe(waveRecipe(kept, described, covered), task);
      const [result] = outcome.results;
      if (result === undefined)
        throw new DataError("RecipeError", outcome.failed[0]?.words ?? "The waves could not be computed.");
      return new WaveSeries(result, covered);
    },
    true,
    isSamePlace,
  );
  return { field, level, span, frame, background: fit, ribbon, waves };
}
