import { describe, expect, test } from "vitest";
import type { OpenFile } from "../../../core/formats/dataset.ts";
import { OpenRecords } from "../../../core/formats/record/open-records.ts";
import { chunkOf } from "../../../core/recipe/chunk-worker.ts";
import type { ChunkJob, Crew } from "../../../core/recipe/crew.ts";
import { CrewMember } from "../../../core/recipe/crew-member.ts";
import { type RunHooks, runRecipe } from "../../../core/recipe/engine.ts";
import { OwnThreadCrew } from "../../../core/recipe/own-thread-crew.ts";
import type { Recipe, RecipeResult } from "../../../core/recipe/recipe.ts";
import { WorkerCrew } from "../../../core/recipe/worker-crew.ts";
import { dailySteps, evenGrid, FAKE_CATALOGUE, fakeFile, fakeValue } from "./fakes.ts";

// A grid so fine that a chunk (2^20 numbers) holds four of its steps, or twelve with a halo of six.
const grid = evenGrid(9, 24_000);
const STEPS = 14;

function file(): OpenFile & { reads: number } {
  return fakeFile("a.nc", [
    {
      variable: "z",
      quantity: "geopotential_height",
      levels: Float64Array.of(500, 250),
      grid,
      steps: dailySteps(STEPS),
    },
  ]);
}

function recipe(results: readonly Partial<RecipeResult>[], background?: Recipe["background"]): Recipe {
  return {
    isohypse: 1,
    ...(background === undefined ? {} : { background }),
    results: results.map((result, i) => ({
      id: `r${i}`,
      diagnostic: "row-sums",
      field: "geopotential_height",
      level: 500,
      ...result,
    })),
  };
}

const HOOKS: RunHooks = { program: "Isohypse test", catalogue: FAKE_CATALOGUE };

function run(asked: Recipe, crew?: Crew, hooks: Partial<RunHooks> = {}) {
  const open = file();
  return runRecipe(asked, [open.contents], crew ?? new OwnThreadCrew([open], FAKE_CATALOGUE), { ...HOOKS, ...hooks });
}

/** A crew of several, out of order on purpose: the later of two jobs comes first. */
function shuffledCrew(size: number): Crew {
  const open = file();
  let turn = 0;
  return {
    size,
    async run(job: ChunkJob) {
      turn += 1;
      const wait = (turn * 3) % 4;
      const part = await chunkOf(new OpenRecords([open]), job, FAKE_CATALOGUE);
      await new Promise((resolve) => setTimeout(resolve, wait));
      return part;
    },
  };
}

function rowSum(step: number, level: number, row: number): number {
  let sum = 0;
  for (let i = 0; i < grid.lon.length; i++) sum += fakeValue(step, level, row, i);
  return sum;
}

describe("runRecipe", () => {
  test("every number of the record arrives once, in order (the definition: the sum over the row)", async () => {
    const { results, failed } = await run(recipe([{ level: [250, 500] }]));
    expect(failed).toEqual([]);
    const [{ data, shape }] = results[0].variables;
    expect(shape).toEqual([STEPS, 2, 9]);
    let at = 0;
    for (let step = 0; step < STEPS; step++)
      for (const level of [1, 0])
        for (let row = 0; row < 9; row++) expect(data[at++], `${step} ${level} ${row}`).toBe(rowSum(step, level, row));
    // Two levels of 9 · 24 000 numbers: two steps fill a chunk.
    expect(results[0].notes).toEqual(["7 parts"]);
  });

  test("options in force and provenance stand in the result", async () => {
    const { results } = await run(recipe([{ factor: 2, waves: [2, 3] }], { kind: "record-mean" }));
    expect(results[0]).toMatchObject({
      id: "r0",
      diagnostic: "row-sums",
      title: "Row sums",
      options: { factor: 2, waves: [2, 3], band: null, mean: "coherent", deep: false },
      provenance: {
        program: "Isohypse test",
        background: { kind: "record-mean" },
        inputs: [{ file: "a.nc", bytes: 1000, variable: "z", why: "made up" }],
      },
    });
    expect(Date.parse(results[0].provenance.made)).toBeGreaterThan(Date.parse("2020-01-01"));
  });

  test.each([
    { kind: "none" },
    { kind: "record-mean" },
    { kind: "period-mean", from: "1970-01-03", to: "1970-01-12" },
    { kind: "annual-cycle", harmonics: 2 },
    { kind: "running-mean", days: 5 },
  ] as const)("bit-identical whatever the crew, with background $kind", async (background) => {
    const asked = recipe([{ count: 2 }, { level: [250, 500] }], background);
    const one = await run(asked);
    expect(one.failed).toEqual([]);
    for (const size of [2, 3]) {
      const many = await run(asked, shuffledCrew(size));
      many.results.forEach((result, i) => {
        expect(result.variables).toEqual(one.results[i].variables);
      });
    }
  });

  test("a record-mean background takes away exactly the mean of the record", async () => {
    const { results } = await run(recipe([{}], { kind: "record-mean" }));
    const [{ data }] = results[0].variables;
    // Anomalies sum to nothing over the record: 14 steps · 24 000 numbers below 6000, each mean rounded to 2^-53 of that.
    const limit = 14 * 24_000 * 6000 * 2 ** -53 * 14;
    for (let row = 0; row < 9; row++) {
      let sum = 0;
      for (let step = 0; step < STEPS; step++) sum += data[step * 9 + row];
      expect(Math.abs(sum), `row ${row}: ${sum} against ${limit}`).toBeLessThan(limit);
    }
  });

  test("a running mean takes away the mean of the five steps around, also where it is read in blocks of rows", async () => {
    // Two levels and fourteen steps of 9 · 24 000 numbers are over the 4 194 304 that are read at a time.
    const { results } = await run(recipe([{ level: [250, 500] }], { kind: "running-mean", days: 5 }));
    const [{ data }] = results[0].variables;
    // A sum of 24 000 numbers below 6000, in two orders.
    const limit = 24_000 * 6000 * 2 ** -53 * 24_000;
    for (let step = 0; step < STEPS; step++)
      for (const [l, level] of [1, 0].entries())
        for (const row of [0, 5, 6, 8]) {
          const got = data[(step * 2 + l) * 9 + row];
          if (step < 2 || step >= STEPS - 2) {
            expect(got).toBeNaN();
            continue;
          }
          const mean = [-2, -1, 0, 1, 2].reduce((sum, by) => sum + rowSum(step + by, level, row), 0) / 5;
          const wanted = rowSum(step, level, row) - mean;
          expect(Math.abs(got - wanted), `${step} ${level} ${row}: ${got} and ${wanted}`).toBeLessThanOrEqual(limit);
        }
  });

  test("the background does not depend on the levels asked for together, nor on other results", async () => {
    const background = { kind: "annual-cycle", harmonics: 2 } as const;
    const alone = await run(recipe([{ level: 250 }], background));
    const together = await run(recipe([{ level: [500, 250] }, { level: 250 }], background));
    expect(together.results[1].variables).toEqual(alone.results[0].variables);
    const [{ data }] = together.results[0].variables;
    const own = alone.results[0].variables[0].data;
    for (let step = 0; step < STEPS; step++)
      expect(data.slice((step * 2 + 1) * 9, (step * 2 + 2) * 9)).toEqual(own.slice(step * 9, step * 9 + 9));
  });

  test("a background is fitted once for all results of a field and level", async () => {
    const open = file();
    const crew = new OwnThreadCrew([open], FAKE_CATALOGUE);
    await runRecipe(recipe([{}, { factor: 2 }, {}], { kind: "record-mean" }), [open.contents], crew, HOOKS);
    // Four steps a chunk: four reads a pass, one pass and three results.
    expect(open.reads).toBe(16);
  });

  test("the halo is read on either side and clipped at the record's ends", async () => {
    const seen: number[][] = [];
    const open = file();
    const crew: Crew = {
      size: 1,
      async run(job) {
        const part = await chunkOf(new OpenRecords([open]), job, FAKE_CATALOGUE);
        seen.push([...job.times, ...part.loaded, part.shape[0]]);
        return part;
      },
    };
    await run(recipe([{ count: 6, period: ["1970-01-02", "1970-01-13"] }]), crew);
    expect(seen).toEqual([[1, 13, 0, 14, 14]]);
  });

  test("a result that fails says why; the others are there (in planning, on the way, at the end, by its field)", async () => {
    const { results, failed } = await run(
      recipe([
        { factor: 9 },
        { factor: 8 },
        { factor: 7 },
        {},
        { field: "air_temperature" },
        { level: 300 },
        { period: ["1980-01-01", "1981-01-01"] },
        { factor: 12 },
      ]),
    );
    expect(results.map(({ id }) => id)).toEqual(["r3"]);
    expect(failed.map(({ id, words }) => [id, words])).toEqual([
      ["r0", "nine is not planned"],
      ["r1", "eight fails on the way"],
      ["r2", "seven does not finish"],
      ["r4", expect.stringContaining('No field is "air_temperature"')],
      ["r5", "a.nc/z has no level 300 hPa; it has 500, 250 hPa"],
      ["r6", expect.stringContaining("no step lies from 1980-01-01")],
      ["r7", "results[7].factor: 12 is not a number from -10 to 10."],
    ]);
  });

  test("a background that the record cannot have fails its result before anything is read", async () => {
    const open = file();
    const { failed } = await runRecipe(
      recipe([{}], { kind: "running-mean", days: 400 }),
      [open.contents],
      new OwnThreadCrew([open], FAKE_CATALOGUE),
      HOOKS,
    );
    expect(failed[0].words).toContain("longer than the record of 14 steps");
    expect(open.reads).toBe(0);
  });

  test("progress rises to 1, counting the background's pass too", async () => {
    const seen: number[] = [];
    await run(recipe([{}, {}], { kind: "record-mean" }), undefined, { progress: ({ done }) => seen.push(done) });
    expect(seen).toHaveLength(12);
    expect(seen).toEqual([...seen].sort((a, b) => a - b));
    expect(seen.at(-1)).toBe(1);
    expect(seen[3]).toBeCloseTo(1 / 3, 12);
  });

  test("cancelling stops the run", async () => {
    const controller = new AbortController();
    const running = run(recipe([{}, {}]), undefined, {
      signal: controller.signal,
      progress: ({ done }) => done > 0.3 && controller.abort(),
    });
    await expect(running).rejects.toMatchObject({ name: "Cancelled" });
  });

  test("onResult takes each result; what it throws fails that result alone", async () => {
    const taken: string[] = [];
    const report = await run(recipe([{}, {}, {}]), undefined, {
      async onResult({ id }) {
        if (id === "r1") throw new Error("the disk is full");
        taken.push(id);
      },
    });
    expect(taken).toEqual(["r0", "r2"]);
    expect(report).toEqual({ results: [], failed: [{ id: "r1", words: "the disk is full" }] });
  });

  test("a worker that dies fails its result; the next one is computed by its replacement", async () => {
    let starts = 0;
    const crew = new WorkerCrew<string>(
      1,
      (events) => {
        starts += 1;
        const isDoomed = starts === 1;
        const member = new CrewMember<string>(
          async () => file(),
          (message) => events.message(message),
          FAKE_CATALOGUE,
        );
        return {
          post(message) {
            if (isDoomed && message.kind === "job") setTimeout(() => events.died("killed by the test"), 1);
            else void member.receive(message);
          },
          end: () => undefined,
        };
      },
      [{ id: 1, source: "a.nc" }],
    );
    const { results, failed } = await run(recipe([{}, {}], { kind: "record-mean" }), crew);
    expect(failed).toEqual([
      { id: "r0", words: "A worker died in the middle of its work and was replaced: killed by the test" },
    ]);
    expect(results[0].variables).toEqual((await run(recipe([{}], { kind: "record-mean" }))).results[0].variables);
    expect(starts).toBe(2);
  });
});

describe("CrewMember", () => {
  function member(open: (source: string) => Promise<OpenFile>) {
    const answers: unknown[] = [];
    return {
      answers,
      member: new CrewMember<string>(open, (message) => answers.push(message), FAKE_CATALOGUE),
    };
  }
  const { contents } = file();
  const job = {
    diagnostic: "row-sums",
    options: { factor: 1 },
    series: {
      grid,
      steps: dailySteps(STEPS),
      times: [0, 1] as const,
      levels: Float64Array.of(500),
      quantity: null,
      units: "gpm",
      background: { kind: "none" } as const,
    },
    fields: { field: "a.nc/z" },
    levelIndices: [0],
    member: null,
    times: [0, 1] as const,
    rows: [0, 9] as const,
    halo: 0,
    background: { kind: "none" } as const,
    fitted: {},
  };

  test("files are opened once and closed when they are wanted no more", async () => {
    const log: string[] = [];
    const { member: worker, answers } = member(async (source) => {
      log.push(`open ${source}`);
      return { ...file(), close: async () => void log.push(`close ${source}`) };
    });
    await worker.receive({ kind: "files", files: [{ id: 1, source: "a" }] });
    await worker.receive({
      kind: "files",
      files: [
        { id: 1, source: "a" },
        { id: 2, source: "b" },
      ],
    });
    await worker.receive({ kind: "files", files: [{ id: 2, source: "b" }] });
    await worker.receive({ kind: "job", number: 5, job, backgrounds: [], forget: [] });
    expect(log).toEqual(["open a", "open b", "close a"]);
    expect(answers).toMatchObject([{ kind: "done", number: 5 }]);
  });

  test("a file that does not open fails the jobs that want it, in its own words, and no others", async () => {
    const { member: worker, answers } = member(async (source) => {
      if (source === "bad") throw new Error("bad is damaged");
      return file();
    });
    await worker.receive({
      kind: "files",
      files: [
        { id: 1, source: "bad" },
        { id: 2, source: "a" },
      ],
    });
    await worker.receive({ kind: "job", number: 1, job, backgrounds: [], forget: [] });
    const other = { ...job, fields: { field: "bad.nc/z" } };
    await worker.receive({ kind: "job", number: 2, job: other, backgrounds: [], forget: [] });
    await worker.receive({ kind: "files", files: [{ id: 2, source: "a" }] });
    await worker.receive({ kind: "job", number: 3, job: other, backgrounds: [], forget: [] });
    expect(answers).toMatchObject([
      { kind: "done", number: 1 },
      { kind: "failed", number: 2, words: "bad is damaged" },
      { kind: "failed", number: 3, name: "NotFoundError", words: "bad.nc/z is not open here. Open its file again." },
    ]);
    expect(contents.fields).toHaveLength(1);
  });
});
