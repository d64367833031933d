import { describe, expect, test } from "vitest";
import type { FittedBackground } from "../../../core/background/fit.ts";
import { NO_BACKGROUND } from "../../../core/background/spec.ts";
import type { ChunkJob } from "../../../core/recipe/crew.ts";
import type { StartWorker, ToWorker, WorkerEvents } from "../../../core/recipe/crew-line.ts";
import { jobParts } from "../../../core/recipe/job-run.ts";
import { WorkerCrew } from "../../../core/recipe/worker-crew.ts";
import { dailySteps, evenGrid } from "./fakes.ts";

function job(from: number, fitted: Record<string, FittedBackground> = {}): ChunkJob {
  return {
    diagnostic: "row-sums",
    options: {},
    series: {
      grid: evenGrid(3, 8),
      steps: dailySteps(10),
      times: [0, 10],
      levels: null,
      quantity: null,
      units: "1",
      background: NO_BACKGROUND,
    },
    fields: { field: "a.nc/z" },
    levelIndices: null,
    member: null,
    times: [from, from + 1],
    rows: [0, 3],
    halo: 0,
    background: NO_BACKGROUND,
    fitted,
  };
}

function fittedBackground(): FittedBackground {
  return { spec: { kind: "record-mean" }, coefficients: new Float64Array(24), nCoefficients: 1, nLon: 8, rows: [0, 3] };
}

/** Workers under the test's hand: they answer when told. */
class Bench {
  readonly workers: { events: WorkerEvents; posted: ToWorker<string>[]; ended: boolean }[] = [];
  readonly start: StartWorker<string> = (events) => {
    const worker = { events, posted: [] as ToWorker<string>[], ended: false };
    this.workers.push(worker);
    return {
      post: (message) => worker.posted.push(message),
      end: () => {
        worker.ended = true;
      },
    };
  };

  jobs(worker: number) {
    return this.workers[worker].posted.filter((message) => message.kind === "job");
  }

  /** The worker's latest job is answered with its first step. */
  answer(worker: number): void {
    const last = this.jobs(worker).at(-1);
    if (last === undefined) throw new Error("no job");
    const part = { step: Int32Array.of(last.job.times[0]) };
    this.workers[worker].events.message({ kind: "done", number: last.number, part });
  }
}

describe("WorkerCrew", () => {
  test("starts workers only when there is work, and no more than its size", async () => {
    const bench = new Bench();
    const crew = new WorkerCrew(2, bench.start);
    expect(bench.workers).toHaveLength(0);
    const parts = [0, 1, 2].map((from) => crew.run(job(from)));
    expect(bench.workers).toHaveLength(2);
    bench.answer(1);
    bench.answer(1);
    bench.answer(0);
    expect((await Promise.all(parts)).map((part) => part.step[0])).toEqual([0, 1, 2]);
  });

  test("a worker that dies fails its own job in words, and another takes the next, with the files opened", async () => {
    const bench = new Bench();
    const crew = new WorkerCrew(1, bench.start, [{ id: 1, source: "a.nc" }]);
    const first = crew.run(job(0));
    const second = crew.run(job(1));
    bench.workers[0].events.died("out of memory");
    await expect(first).rejects.toMatchObject({
      name: "WorkerError",
      message: "A worker died in the middle of its work and was replaced: out of memory",
    });
    expect(bench.workers).toHaveLength(2);
    expect(bench.workers[1].posted[0]).toEqual({ kind: "files", files: [{ id: 1, source: "a.nc" }] });
    bench.answer(1);
    expect((await second).step[0]).toBe(1);
  });

  test("a worker that cannot be started fails each job, and none waits for ever", async () => {
    const crew = new WorkerCrew(2, (events) => {
      events.died("it could not be loaded");
      return { post: () => undefined, end: () => undefined };
    });
    const jobs = [0, 1, 2].map((from) => crew.run(job(from)));
    for (const waiting of jobs)
      await expect(waiting).rejects.toMatchObject({ name: "WorkerError", message: /could not be loaded/ });
  });

  test("an error in a worker arrives with its name and words", async () => {
    const bench = new Bench();
    const crew = new WorkerCrew(1, bench.start);
    const running = crew.run(job(0));
    const { number } = bench.jobs(0)[0];
    bench.workers[0].events.message({ kind: "failed", number, name: "FormatError", words: "cut short" });
    await expect(running).rejects.toMatchObject({ name: "FormatError", message: "cut short" });
  });

  test("a background goes to a worker once, and the fifth makes it drop the first", async () => {
    const bench = new Bench();
    const crew = new WorkerCrew(1, bench.start);
    const backgrounds = Array.from({ length: 5 }, fittedBackground);
    for (const background of [...backgrounds.slice(0, 2), ...backgrounds]) {
      const running = crew.run(job(0, { field: background }));
      bench.answer(0);
      await running;
    }
    expect(bench.jobs(0).map(({ backgrounds: sent }) => sent.length)).toEqual([1, 1, 0, 0, 1, 1, 1]);
    expect(bench.jobs(0).map(({ forget }) => forget.length)).toEqual([0, 0, 0, 0, 0, 0, 1]);
    const [first] = bench.jobs(0);
    expect(bench.jobs(0).at(-1)?.forget).toEqual([first.job.fitted.field]);
  });

  test("what cannot be sent fails its job and leaves the worker free", async () => {
    const bench = new Bench();
    let refuses = true;
    const crew = new WorkerCrew<string>(1, (events) => {
      const line = bench.start(events);
      return {
        ...line,
        post(message) {
          if (message.kind === "job" && refuses) throw new Error("cannot be cloned");
          line.post(message);
        },
      };
    });
    await expect(crew.run(job(0))).rejects.toThrow("cannot be cloned");
    refuses = false;
    const next = crew.run(job(1));
    bench.answer(0);
    expect((await next).step[0]).toBe(1);
    expect(bench.workers).toHaveLength(1);
  });

  test("a cancelled job that still waits is never sent; ending cancels all", async () => {
    const bench = new Bench();
    const crew = new WorkerCrew(1, bench.start);
    const signal = { aborted: false };
    const running = crew.run(job(0));
    const waiting = crew.run(job(1), signal);
    signal.aborted = true;
    bench.answer(0);
    await running;
    await expect(waiting).rejects.toMatchObject({ name: "Cancelled" });
    expect(bench.jobs(0)).toHaveLength(1);
    const last = crew.run(job(2));
    crew.end();
    await expect(last).rejects.toMatchObject({ name: "Cancelled" });
    await expect(crew.run(job(3))).rejects.toMatchObject({ name: "Cancelled" });
    expect(bench.workers[0].ended).toBe(true);
  });
});

describe("jobParts", () => {
  const jobs = Array.from({ length: 7 }, (_, from) => job(from));

  test("parts stand in the order of the jobs, however they came", async () => {
    let under = 0;
    let most = 0;
    const crew = {
      size: 3,
      async run({ times }: ChunkJob) {
        under += 1;
        most = Math.max(most, under);
        for (let turn = 0; turn < (times[0] * 5) % 7; turn++) await Promise.resolve();
        under -= 1;
        return { step: Int32Array.of(times[0]) };
      },
    };
    const done: number[] = [];
    const parts = await jobParts(jobs, crew, undefined, ({ times }) => done.push(times[0]));
    expect(parts.map((part) => part.step[0])).toEqual([0, 1, 2, 3, 4, 5, 6]);
    expect(done).not.toEqual([0, 1, 2, 3, 4, 5, 6]);
    expect(most).toBe(3);
  });

  test("the earliest failure is told, and no further job starts", async () => {
    const started: number[] = [];
    const crew = {
      size: 2,
      async run({ times }: ChunkJob) {
        started.push(times[0]);
        if (times[0] >= 2) throw new Error(`step ${times[0]}`);
        return {};
      },
    };
    await expect(jobParts(jobs, crew, undefined, () => undefined)).rejects.toThrow("step 2");
    expect(started.length).toBeLessThanOrEqual(4);
  });

  test("cancelling stops between jobs", async () => {
    const signal = { aborted: false };
    const started: number[] = [];
    const crew = {
      size: 1,
      async run({ times }: ChunkJob) {
        started.push(times[0]);
        if (times[0] === 1) signal.aborted = true;
        return {};
      },
    };
    await expect(jobParts(jobs, crew, signal, () => undefined)).rejects.toMatchObject({ name: "Cancelled" });
    expect(started).toEqual([0, 1]);
  });
});
