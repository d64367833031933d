import { describe, expect, test } from "vitest";
import type { SourceDescription, TaskProgress } from "../../../app/worker/desk.ts";
import { type DeskFile, type DeskParts, DeskService } from "../../../app/worker/desk-service.ts";
import { bandMeans } from "../../../app/worker/ribbon.ts";
import { Tasks } from "../../../app/worker/tasks.ts";
import type { OpenFile } from "../../../core/formats/dataset.ts";
import { rowWeights } from "../../../core/grid/rows.ts";
import { CATALOGUE } from "../../../core/recipe/catalogue.ts";
import { OwnThreadCrew } from "../../../core/recipe/own-thread-crew.ts";
import { dailySteps, evenGrid, fakeFile, fakeValue } from "../../core/recipe/fakes.ts";

const grid = evenGrid(19, 16); // rows every 10°
const STEPS = 40;

function source(name: string): SourceDescription {
  return { kind: "range", name, size: 1, url: `/files/${name}` };
}

/** A desk whose files are made up; `opened` counts how often each was opened, `files` are the open ones of the desk itself. */
function desk() {
  const files = new Map<string, ReturnType<typeof fakeFile>>();
  const log: string[] = [];
  async function open({ source: asked, corrections }: DeskFile): Promise<OpenFile> {
    const name = asked.kind === "range" ? asked.name : "?";
    if (name === "bad.nc") throw new Error("bad.nc is damaged. Fetch it again.");
    log.push(`open ${name}`);
    const quantity = corrections[0]?.quantity ?? "geopotential_height";
    const file = fakeFile(name, [
      { variable: "z", quantity, levels: Float64Array.of(500, 250), grid, steps: dailySteps(STEPS) },
      { variable: "flat", quantity, levels: null, grid, steps: dailySteps(STEPS) },
    ]);
    file.close = async () => void log.push(`close ${name}`);
    files.set(name, file);
    return file;
  }
  let crew = new OwnThreadCrew([], CATALOGUE);
  const parts: DeskParts = {
    open,
    program: "Isohypse test",
    crew: {
      size: 1,
      run: (job, signal) => crew.run(job, signal),
      setFiles: () => {
        crew = new OwnThreadCrew([...files.values()], CATALOGUE);
      },
    },
  };
  return { service: new DeskService(parts), files, log };
}

function plane(step: number, level: number): number[] {
  return Array.from({ length: 19 * 16 }, (_, i) => Math.fround(fakeValue(step, level, Math.floor(i / 16), i % 16)));
}

const Z = { key: "a.nc/z", level: 1, member: null };
const NONE = { kind: "none" } as const;

describe("files", () => {
  test("a long opening tells how far it is, and can be cancelled", async () => {
    const { service } = desk();
    const told: { task: number; title: string; done: number }[] = [];
    await service.onProgress((progress) => told.push(progress));
    const slow = new DeskService({
      open: async (_, hooks) => {
        const { progress, signal } = hooks ?? {};
        progress?.(0.1);
        await new Promise((resolve) => setTimeout(resolve, 520)); // shorter work shows no progress
        progress?.(0.5);
        if (signal?.aborted) throw new Error("stopped");
        return fakeFile("slow.grib", []);
      },
      program: "test",
      crew: { size: 1, run: () => Promise.reject(new Error("none")), setFiles: () => undefined },
    });
    await slow.onProgress((progress) => told.push(progress));
    await slow.open([source("slow.grib")], []);
    expect(told.map(({ title, done }) => [title, done])).toEqual([
      ["Reading slow.grib", 0.5],
      ["Reading slow.grib", 1],
    ]);
    const opening = slow.open([source("slow.grib")], []);
    await new Promise((resolve) => setTimeout(resolve, 20));
    await slow.cancel((told[0]?.task ?? 0) - 1);
    expect((await opening).refused[0]?.words).toBe("The task was cancelled.");
  });

  test("what opens is told, what does not is refused in words, and the rest stays open", async () => {
    const { service } = desk();
    const report = await service.open([source("a.nc"), source("bad.nc"), source("b.nc")], []);
    expect(report.opened.map(({ file }) => file)).toEqual(["a.nc", "b.nc"]);
    expect(report.refused).toEqual([{ file: "bad.nc", words: "bad.nc is damaged. Fetch it again." }]);
    expect((await service.frame(Z, 0, NONE)).values).toHaveLength(19 * 16);
  });

  test("a file of the same name replaces the earlier one, which is closed; corrections open it anew", async () => {
    const { service, log } = desk();
    await service.open([source("a.nc")], []);
    await service.open([source("a.nc")], []);
    const contents = await service.correct("a.nc", [{ file: "a.nc", variable: "z", quantity: "air_temperature" }]);
    expect(contents.fields[0].quantity).toBe("air_temperature");
    expect(log).toEqual(["open a.nc", "open a.nc", "close a.nc", "open a.nc", "close a.nc"]);
  });

  test("what is not open is refused in words", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    await service.close("a.nc");
    await service.close("a.nc");
    await expect(service.frame(Z, 0, NONE)).rejects.toThrow("a.nc/z is not open");
    await expect(service.correct("a.nc", [])).rejects.toThrow("a.nc is not open");
  });
});

describe("frames", () => {
  test("the numbers of the step and level, in a buffer of their own", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    const first = await service.frame(Z, 3, NONE);
    expect([...first.values]).toEqual(plane(3, 1));
    expect(first.background).toBeNull();
    // A transferred frame must not take the cached one with it.
    first.values.fill(0);
    expect([...(await service.frame(Z, 3, NONE)).values]).toEqual(plane(3, 1));
    expect([...(await service.frame({ key: "a.nc/flat", level: 0, member: null }, 5, NONE)).values]).toEqual(
      plane(5, 0),
    );
  });

  test("stepping reads ahead in blocks, in the direction of travel", async () => {
    const { service, files } = desk();
    await service.open([source("a.nc")], []);
    for (let time = 20; time < 36; time++)
      expect([...(await service.frame(Z, time, NONE)).values]).toEqual(plane(time, 1));
    const file = files.get("a.nc");
    // The first step, then blocks of eight from 21, 29 and 37.
    expect(file?.reads).toBeLessThanOrEqual(4);
    for (let time = 19; time > 4; time--)
      expect([...(await service.frame(Z, time, NONE)).values]).toEqual(plane(time, 1));
    expect(file?.reads).toBeLessThanOrEqual(8);
  });

  test("a step or level that is not there is refused", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    await expect(service.frame(Z, STEPS, NONE)).rejects.toThrow("a.nc/z has no step 40; it has 40.");
    await expect(service.frame({ key: "a.nc/z", level: 2, member: null }, 0, NONE)).rejects.toThrow(
      "no level number 2",
    );
  });

  test("a read that failed is tried again", async () => {
    const { service, files } = desk();
    await service.open([source("a.nc")], []);
    const file = files.get("a.nc");
    if (file === undefined) throw new Error("not open");
    const { read } = file;
    file.read = async () => {
      throw new Error("gone for a moment");
    };
    await expect(service.frame(Z, 0, NONE)).rejects.toThrow("gone for a moment");
    file.read = read;
    expect([...(await service.frame(Z, 0, NONE)).values]).toEqual(plane(0, 1));
  });
});

describe("backgrounds", () => {
  const MEAN = { kind: "record-mean" } as const;

  test("none until it is fitted, then the mean over the record (the definition)", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    expect((await service.frame(Z, 3, MEAN)).background).toBeNull();
    await service.prepareBackground(Z, MEAN, 1);
    const { background } = await service.frame(Z, 3, MEAN);
    for (let i = 0; i < 19 * 16; i++) {
      let sum = 0;
      for (let step = 0; step < STEPS; step++) sum += fakeValue(step, 1, Math.floor(i / 16), i % 16);
      expect(background?.[i]).toBe(Math.fround(sum / STEPS));
    }
    // Another level has not been fitted.
    expect((await service.frame({ key: "a.nc/z", level: 0, member: null }, 3, MEAN)).background).toBeNull();
  });

  test("is fitted once, and forgotten with its file", async () => {
    const { service, files } = desk();
    await service.open([source("a.nc")], []);
    await service.prepareBackground(Z, MEAN, 1);
    const reads = files.get("a.nc")?.reads;
    await service.prepareBackground(Z, MEAN, 2);
    expect(files.get("a.nc")?.reads).toBe(reads);
    await service.open([source("a.nc")], []);
    expect((await service.frame(Z, 3, MEAN)).background).toBeNull();
  });

  test("a running mean needs no fitting: the mean of the steps around, none at the ends", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    const running = { kind: "running-mean", days: 3 } as const;
    await service.prepareBackground(Z, running, 1);
    const { background } = await service.frame(Z, 10, running);
    for (let i = 0; i < 19 * 16; i++) {
      const [row, column] = [Math.floor(i / 16), i % 16];
      const mean = (fakeValue(9, 1, row, column) + fakeValue(10, 1, row, column) + fakeValue(11, 1, row, column)) / 3;
      // Stored as float32: half a unit in the last place of a number below 8192, and as much for the order of summing.
      expect(Math.abs((background?.[i] as number) - mean)).toBeLessThanOrEqual(2 ** -11);
    }
    expect((await service.frame(Z, 0, running)).background?.every(Number.isNaN)).toBe(true);
  });
});

describe("ribbon", () => {
  test("band means of the field and of its background, rows weighted by area (methods: sin of the edges)", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    const ribbon = await service.ribbon(Z, [50, 70], [4, 12], { kind: "record-mean" }, 1);
    expect(ribbon.times).toEqual([4, 12]);
    expect(ribbon.values).toHaveLength(8 * 16);
    const rows = [14, 15, 16];
    const radians = Math.PI / 180;
    const weights = rows.map((row) => Math.sin((row * 10 - 85) * radians) - Math.sin((row * 10 - 95) * radians));
    const total = weights.reduce((sum, weight) => sum + weight, 0);
    for (let step = 0; step < 8; step++)
      for (let i = 0; i < 16; i++) {
        const mean = rows.reduce((sum, row, j) => sum + weights[j] * fakeValue(step + 4, 1, row, i), 0) / total;
        expect(Math.abs(ribbon.values[step * 16 + i] - mean)).toBeLessThanOrEqual(2 ** -11);
      }
    expect(ribbon.background).toHaveLength(8 * 16);
    // A mean over the record does not change from step to step.
    expect(ribbon.background?.slice(0, 16)).toEqual(ribbon.background?.slice(112));
  });

  test("equal ends are the nearest row; no background, none returned; only the band's rows are read", async () => {
    const { service, files } = desk();
    await service.open([source("a.nc")], []);
    const file = files.get("a.nc");
    if (file === undefined) throw new Error("not open");
    const asked: unknown[] = [];
    const { read } = file;
    file.read = (key, request) => {
      asked.push(request.rows);
      return read.call(file, key, request);
    };
    const ribbon = await service.ribbon(Z, [61, 61], [0, 2], NONE, 1);
    expect([...ribbon.values.slice(0, 16)]).toEqual(plane(0, 1).slice(15 * 16, 16 * 16));
    expect(ribbon.background).toBeNull();
    expect(asked).toEqual([[15, 16]]);
  });

  test("refused in words", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    await expect(service.ribbon(Z, [51, 52], [0, 2], NONE, 1)).rejects.toThrow("holds no row");
    await expect(service.ribbon(Z, [50, 60], [0, 41], NONE, 1)).rejects.toThrow("has no steps 0 to 41");
  });

  test("a column's mean is over the rows that are there", () => {
    const weights = rowWeights(Float64Array.of(40, 50, 60));
    const data = Float64Array.of(1, Number.NaN, Number.NaN, 3, Number.NaN, Number.NaN);
    const [first, second] = bandMeans(data, weights, 2);
    const wanted = weights[0] / (weights[0] + weights[2]);
    expect(bandMeans(Float64Array.of(1, 0, Number.NaN, 0, 0, 0), weights, 2)[0]).toBeCloseTo(wanted, 6);
    expect(first).toBe(1);
    expect(second).toBe(3);
    expect(bandMeans(new Float64Array(3).fill(Number.NaN), weights, 1)[0]).toBeNaN();
  });
});

describe("tasks", () => {
  test("short work is silent; longer work reports, and its end is told", async () => {
    let now = 0;
    const seen: TaskProgress[] = [];
    const tasks = new Tasks(() => now);
    tasks.listen((progress) => seen.push(progress));
    await tasks.run(1, async (task) => {
      now = 400;
      task.report("quick", 0.9, 1);
    });
    await tasks.run(2, async (task) => {
      now = 1000;
      task.report("long", 0.5, 1);
      now = 1050;
      task.report("long", 0.6, 1);
      now = 1200;
      task.report("long", 1, 0);
    });
    expect(seen.map(({ task, done }) => [task, done])).toEqual([
      [2, 0.5],
      [2, 0.999],
      [2, 1],
    ]);
  });

  test("cancelled by number; a new task of a number takes the place of the old", async () => {
    const tasks = new Tasks();
    const wait = (signal: AbortSignal) =>
      new Promise<void>((_, reject) => {
        signal.addEventListener("abort", () => reject(new Error("whatever the work throws")));
      });
    const first = tasks.run(1, ({ signal }) => wait(signal));
    const second = tasks.run(1, ({ signal }) => wait(signal));
    await expect(first).rejects.toMatchObject({ name: "Cancelled" });
    tasks.cancel(1);
    await expect(second).rejects.toMatchObject({ name: "Cancelled" });
    tasks.cancel(99);
  });

  test("a cancelled ribbon stops", async () => {
    const { service } = desk();
    await service.open([source("a.nc")], []);
    const running = service.ribbon(Z, [-90, 90], [0, STEPS], { kind: "record-mean" }, 7);
    await service.cancel(7);
    await expect(running).rejects.toMatchObject({ name: "Cancelled" });
  });
});
