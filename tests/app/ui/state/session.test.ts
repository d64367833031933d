import { afterEach, beforeEach, expect, test, vi } from "vitest";
import type { LaunchState, Shell, ShellFile } from "../../../../app/shell/contract.ts";
import { withStep, withTheme } from "../../../../app/ui/case/actions.ts";
import { caseOfText, caseText } from "../../../../app/ui/case/case-text.ts";
import { Session } from "../../../../app/ui/session/session.ts";
import type { Desk, SourceDescription, TaskProgress } from "../../../../app/worker/desk.ts";
import { DataError } from "../../../../core/errors.ts";
import type { Correction } from "../../../../core/formats/dataset.ts";
import { contentsOf, field } from "./fields.ts";

/** A desk that opens every name but those that start with "bad", and writes down what it is asked. */
class PaperDesk implements Pick<Desk, "open" | "close" | "correct" | "onProgress" | "cancel"> {
  readonly said: string[] = [];
  tell: (progress: TaskProgress) => void = () => undefined;

  async open(sources: readonly SourceDescription[], corrections: readonly Correction[]) {
    const opened = [];
    const refused = [];
    for (const source of sources) {
      const name = source.kind === "file" ? source.file.name : source.kind === "range" ? source.name : source.path;
      this.said.push(`open ${name}${corrections.length > 0 ? ` with ${corrections.length} corrections` : ""}`);
      if (name.startsWith("bad")) refused.push({ file: name, words: `${name} ends at byte 7. Fetch it again.` });
      else opened.push(contentsOf(field({ file: name })));
    }
    return { opened, refused };
  }
  async correct(file: string, corrections: readonly Correction[]) {
    this.said.push(`correct ${file}`);
    if (corrections.some(({ units }) => units === "furlong")) throw new DataError("UnitError", "furlong is not known.");
    return contentsOf(field({ file, why: "you said so" }));
  }
  async close(file: string) {
    this.said.push(`close ${file}`);
  }
  async onProgress(callback: (progress: TaskProgress) => void) {
    this.tell = callback;
  }
  async cancel(task: number) {
    this.said.push(`cancel ${task}`);
  }
}

const SAMPLE: ShellFile = { name: "invented-winter.nc", size: 10, url: "/files/1", place: null };
const MINE: ShellFile = { name: "mine.nc", size: 20, url: "/files/2", place: "/data/mine.nc" };

interface Start {
  readonly launch?: Partial<LaunchState>;
  readonly there?: readonly ShellFile[];
  readonly fails?: boolean;
}

function started({ launch = {}, there = [MINE], fails = false }: Start = {}) {
  const desk = new PaperDesk();
  const saved: string[] = [];
  const shell: Shell = {
    launch: async () => ({
      version: "9.9.9",
      shell: "local",
      files: [SAMPLE],
      missing: [],
      sample: true,
      autosave: null,
      ...launch,
    }),
    sampleFiles: async () => [SAMPLE],
    chooseFiles: async () => null,
    filesAt: async (places) => there.filter(({ place }) => place !== null && places.includes(place)),
    autosave: async (text) => {
      if (fails) throw new Error("The disk is full.");
      saved.push(text);
    },
  };
  const session = new Session(desk as unknown as Desk, shell, () => new Date("2026-01-02T03:04:05Z"));
  return { session, desk, saved };
}
const named = (name: string, text = "CDF"): File => new File([text], name);
const titles = (session: Session): string[] => session.state().notices.map(({ title }) => title);

beforeEach(() => void vi.useFakeTimers());
afterEach(() => void vi.useRealTimers());

test("a first start opens the sample", async () => {
  const { session } = started();
  expect(session.state().isStarting).toBe(true);
  await session.start();
  const { kept, isSample, isStarting } = session.state();
  expect([isStarting, isSample, kept.title, kept.field]).toEqual([
    false,
    true,
    "Invented winter",
    "invented-winter.nc/z",
  ]);
});

test("starting twice, as a strict renderer does, opens once", async () => {
  const { session, desk } = started();
  await Promise.all([session.start(), session.start()]);
  expect(desk.said).toEqual(["open invented-winter.nc"]);
});

test("files named at the launch go before the case of last time; missing ones are told of", async () => {
  const before = started();
  await before.session.start();
  const { session } = started({
    launch: {
      files: [MINE],
      sample: false,
      missing: ["/data/gone.nc: no such file."],
      autosave: caseText(before.session.state().kept),
    },
  });
  await session.start();
  expect(session.state().kept.files).toEqual([{ name: "mine.nc", size: 20, place: "/data/mine.nc" }]);
  expect(session.state().notices[0]?.words).toContain("gone.nc");
});

test("the sample makes way for the user's own file, and its settings with it", async () => {
  const { session, desk } = started();
  await session.start();
  session.act((kept) => withTheme(kept, "night"));
  session.act((kept) => withStep(kept, 3, 60));
  await session.openFiles([named("winter.nc")]);
  const { kept, contents, isSample } = session.state();
  expect(desk.said).toContain("close invented-winter.nc");
  expect(contents.map(({ file }) => file)).toEqual(["winter.nc"]);
  expect([isSample, kept.title, kept.field, kept.theme, kept.cursor.step]).toEqual([
    false,
    "winter",
    "winter.nc/z",
    "night",
    59,
  ]);
});

test("a second file joins, and shows itself", async () => {
  const { session } = started();
  await session.start();
  await session.openFiles([named("a.nc"), named("b.nc")]);
  await session.openFiles([named("c.nc")]);
  expect(session.state().kept.files.map(({ name }) => name)).toEqual(["a.nc", "b.nc", "c.nc"]);
  expect(session.state().kept.field).toBe("c.nc/z");
  await session.closeFile("c.nc");
  expect(session.state().kept.field).toBe("a.nc/z");
});

test("a refused file gives the words, and the open case stays", async () => {
  const { session } = started();
  await session.start();
  await session.openFiles([named("mine.nc")]);
  const before = session.state().kept;
  await session.openFiles([named("bad.nc")]);
  expect(session.state().kept).toBe(before);
  expect(session.state().notices[0]).toMatchObject({
    kind: "error",
    title: "bad.nc was not opened.",
    words: "bad.nc ends at byte 7. Fetch it again.",
  });
  session.dismiss(session.state().notices[0]?.id ?? -1);
  expect(session.state().notices).toEqual([]);
});

test("the case is kept after a rest, once, and says when", async () => {
  const { session, saved } = started();
  await session.start();
  await vi.runAllTimersAsync();
  saved.length = 0;
  for (let step = 0; step < 20; step++) session.act((kept) => withStep(kept, step, 60));
  expect(saved).toEqual([]);
  await vi.runAllTimersAsync();
  expect(saved.map((text) => caseOfText(text, "a").cursor.step)).toEqual([19]);
  expect(session.state().savedAt?.toISOString()).toBe("2026-01-02T03:04:05.000Z");
  await session.flush();
  expect(saved.length).toBe(1); // nothing changed since
});

test("a case that cannot be kept is told of once", async () => {
  const { session } = started({ fails: true });
  await session.start();
  await vi.runAllTimersAsync();
  session.act((kept) => withStep(kept, 3, 60));
  await vi.runAllTimersAsync();
  expect(titles(session)).toEqual(["The case could not be kept."]);
  expect(session.state().notices[0]?.words).toBe("The disk is full.");
});

/** The text of a case with one file at a place and, if wanted, one from the file input. */
async function caseOf(files: readonly ShellFile[], dropped: readonly File[] = []): Promise<string> {
  const { session } = started({ launch: { files, sample: files.includes(SAMPLE) } });
  await session.start();
  if (dropped.length > 0) await session.openFiles(dropped);
  session.act((kept) => withStep(kept, 7, 60));
  return caseText(session.state().kept);
}

test("the case of last time comes back with its files", async () => {
  const text = await caseOf([MINE]);
  const { session, saved } = started({ launch: { autosave: text } });
  await session.start();
  expect(caseText(session.state().kept)).toBe(text);
  expect(session.state().awaited).toEqual([]);
  await vi.runAllTimersAsync();
  expect(saved).toEqual([]);
  const sample = started({ launch: { autosave: await caseOf([SAMPLE]) } });
  await sample.session.start();
  expect([sample.session.state().isSample, sample.session.state().kept.cursor.step]).toEqual([true, 7]);
});

test("a file without a place is asked for, and the whole state is back once it is there", async () => {
  const text = await caseOf([MINE], [named("dropped.nc")]);
  const { session } = started({ launch: { autosave: text } });
  await session.start();
  expect(session.state().awaited.map(({ name }) => name)).toEqual(["dropped.nc"]);
  expect(caseText(session.state().kept)).toBe(text); // nothing is settled away meanwhile
  await session.openFiles([named("dropped.nc")]);
  expect(session.state().awaited).toEqual([]);
  expect(caseText(session.state().kept)).toBe(text);
  expect(session.state().notices).toEqual([]);
});

test("an awaited file of another size is taken, and said to be another", async () => {
  const { session } = started({ launch: { autosave: await caseOf([MINE], [named("dropped.nc")]) } });
  await session.start();
  await session.openFiles([named("dropped.nc", "longer than it was")]);
  expect(session.state().awaited).toEqual([]);
  expect(session.state().notices[0]).toMatchObject({
    kind: "note",
    title: "dropped.nc is not the very file of the case.",
  });
});

test("an awaited file can be left out", async () => {
  const { session } = started({ launch: { autosave: await caseOf([MINE], [named("dropped.nc")]) } });
  await session.start();
  await session.closeFile("dropped.nc");
  expect(session.state().kept.files.map(({ name }) => name)).toEqual(["mine.nc"]);
  expect(session.state().kept.field).toBe("mine.nc/z");
});

test("a file that is no longer at its place is asked for", async () => {
  const { session } = started({ launch: { autosave: await caseOf([MINE]) }, there: [] });
  await session.start();
  expect(session.state().awaited.map(({ name }) => name)).toEqual(["mine.nc"]);
});

test("a case of last time that cannot be read is told of, and the sample opens", async () => {
  const { session } = started({ launch: { autosave: "{broken" } });
  await session.start();
  expect(titles(session)).toEqual(["The case of last time could not be opened again."]);
  expect(session.state().isSample).toBe(true);
});

test("a case file opens by the same door as data; a broken one leaves the case alone", async () => {
  const text = await caseOf([MINE]);
  const { session, desk } = started();
  await session.start();
  await session.openFiles([named("my.case.json", text)]);
  expect(caseText(session.state().kept)).toBe(text);
  expect(desk.said).toContain("close invented-winter.nc");
  await session.openFiles([named("broken.json", text.slice(0, 60))]);
  expect(caseText(session.state().kept)).toBe(text);
  expect(session.state().notices[0]?.words).toContain("The open case stays.");
});

test("files that are open already are not opened anew by a case", async () => {
  const text = await caseOf([MINE]);
  const { session, desk } = started({ launch: { files: [MINE], sample: false } });
  await session.start();
  desk.said.length = 0;
  await session.openFiles([named("my.case.json", text)]);
  expect(desk.said).toEqual([]);
  expect(session.state().kept.cursor.step).toBe(7);
});

test("what the user says of a variable is kept in the case, and goes along when files open", async () => {
  const { session, desk } = started({ launch: { files: [MINE], sample: false } });
  await session.start();
  const correction = { file: "mine.nc", variable: "z", quantity: "geopotential_height", units: "m" } as const;
  await session.correct(correction);
  expect(session.state().kept.corrections).toEqual([correction]);
  expect(session.state().contents[0]?.fields[0]?.why).toBe("you said so");
  await session.openFiles([named("other.nc")]);
  expect(desk.said.at(-1)).toBe("open other.nc with 1 corrections");
  await session.correct({ ...correction, units: "furlong" });
  expect(session.state().kept.corrections).toEqual([correction]);
  expect(session.state().notices[0]?.words).toBe("furlong is not known.");
});

test("progress is shown while a task runs, and gone when it is over", async () => {
  const { session, desk } = started();
  await session.start();
  desk.tell({ task: 4, title: "Reading", done: 0.2, secondsLeft: 3 });
  desk.tell({ task: 4, title: "Reading", done: 0.4, secondsLeft: 2 });
  desk.tell({ task: 5, title: "Fitting", done: 0.1, secondsLeft: null });
  expect(session.state().tasks.map(({ task, done }) => [task, done])).toEqual([
    [4, 0.4],
    [5, 0.1],
  ]);
  desk.tell({ task: 4, title: "Reading", done: 1, secondsLeft: 0 });
  expect(session.state().tasks.map(({ task }) => task)).toEqual([5]);
});

test("a shell that does not answer is told of, and the window stays usable", async () => {
  const { session } = started();
  const silent = new Session(
    new PaperDesk() as unknown as Desk,
    { launch: () => Promise.reject(new Error("The program that serves this window has stopped.")) } as unknown as Shell,
  );
  await silent.start();
  expect(silent.state().isStarting).toBe(false);
  expect(titles(silent)).toEqual(["The window could not be started in full."]);
  expect(session.state().notices).toEqual([]);
});
