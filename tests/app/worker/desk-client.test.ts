import { MessageChannel } from "node:worker_threads";
import * as Comlink from "comlink";
import { afterEach, describe, expect, test } from "vitest";
import type { Desk, SourceDescription, TaskProgress } from "../../../app/worker/desk.ts";
import { type DeskClient, type DeskWorker, startDesk } from "../../../app/worker/desk-client.ts";

/** A desk at the other end of a message channel, which can be killed, silenced, or never come up. */
class FakeWorker {
  readonly client: DeskWorker;
  readonly calls: string[] = [];
  terminated = false;
  listener: ((progress: TaskProgress) => void) | null = null;
  /** True once it was asked to open a file that it never ends with. */
  isStuck = false;
  /** Calls to `frame` wait until this resolves. */
  frames: Promise<void> = Promise.resolve();

  constructor(answers = true) {
    const { port1, port2 } = new MessageChannel();
    this.client = Object.assign(port1 as unknown as DeskWorker, {
      onerror: null,
      onmessageerror: null,
      terminate: () => {
        this.terminated = true;
        port1.close();
        port2.close();
      },
    });
    const desk: Partial<Desk> & { ping(): boolean } = {
      open: async (sources) => {
        const [source] = sources;
        const name = source.kind === "range" ? source.name : "?";
        this.calls.push(`open ${name}`);
        if (name === "endless.nc") {
          this.isStuck = true;
          await new Promise(() => undefined);
        }
        if (name === "bad.nc") return { opened: [], refused: [{ file: name, words: "damaged" }] };
        return {
          opened: [{ file: name, format: "", bytes: 1, fields: [], leftOut: [], notes: [], about: {} }],
          refused: [],
        };
      },
      close: async (file) => void this.calls.push(`close ${file}`),
      frame: async () => {
        await this.frames;
        return { values: Float32Array.of(1, Number.NaN), background: null };
      },
      cancel: async () => {
        throw Object.assign(new Error("no such task"), { name: "NotFoundError" });
      },
      onProgress: async (callback) => {
        this.listener = callback;
      },
      ping: () => (this.isStuck ? new Promise<boolean>(() => undefined) : true) as boolean,
    };
    if (answers) Comlink.expose(desk, port2 as unknown as Comlink.Endpoint);
  }

  die(message: string): void {
    this.client.onerror?.({ message } as ErrorEvent);
  }
}

const clients: DeskClient[] = [];
afterEach(() => {
  for (const client of clients.splice(0)) client.end();
});

function start(workers: (index: number) => FakeWorker, answerWithin = 10_000, openWithin = 10_000) {
  const started: FakeWorker[] = [];
  const client = startDesk({
    start: () => {
      const worker = workers(started.length);
      started.push(worker);
      return worker.client;
    },
    askEvery: 20,
    answerWithin,
    openWithin,
  });
  clients.push(client);
  return { client, started };
}

const range = (name: string): SourceDescription => ({ kind: "range", name, size: 1, url: `/files/${name}` });
const PLACE = { key: "a.nc/z", level: 0, member: null };

describe("startDesk", () => {
  test("passes calls on, numbers and errors with name and words come back", async () => {
    const { client } = start(() => new FakeWorker());
    const report = await client.open([range("a.nc"), range("bad.nc")], []);
    expect(report.opened.map(({ file }) => file)).toEqual(["a.nc"]);
    expect(report.refused).toEqual([{ file: "bad.nc", words: "damaged" }]);
    expect([...(await client.frame(PLACE, 0, { kind: "none" })).values]).toEqual([1, Number.NaN]);
    await expect(client.cancel(3)).rejects.toMatchObject({ name: "NotFoundError", message: "no such task" });
  });

  test("a worker that dies fails the calls under way in words; the next call finds a new one with the same files open", async () => {
    const { client, started } = start(() => new FakeWorker());
    const progress: TaskProgress[] = [];
    await client.onProgress((told) => progress.push(told));
    await client.open([range("a.nc"), range("b.nc"), range("c.nc")], []);
    await client.close("b.nc");
    started[0].frames = new Promise(() => undefined);
    const calls = [client.frame(PLACE, 0, { kind: "none" }), client.frame(PLACE, 1, { kind: "none" })];
    await new Promise((resolve) => setTimeout(resolve, 10));
    started[0].die("out of memory");
    for (const call of calls)
      await expect(call).rejects.toMatchObject({
        name: "WorkerError",
        message: "The desk's worker ended and is started anew: out of memory. Try again.",
      });
    expect(started[0].terminated).toBe(true);
    expect((await client.frame(PLACE, 0, { kind: "none" })).values).toHaveLength(2);
    expect(started).toHaveLength(2);
    expect(started[1].calls).toEqual(["open a.nc", "open c.nc"]);
    started[1].listener?.({ task: 1, title: "t", done: 0.5, secondsLeft: null });
    await new Promise((resolve) => setTimeout(resolve, 20));
    expect(progress).toHaveLength(1);
  });

  test("a worker that never loads fails each call, and none waits for ever", async () => {
    const { client, started } = start(() => {
      const worker = new FakeWorker(false);
      setTimeout(() => worker.die(""), 5);
      return worker;
    });
    for (let i = 1; i <= 2; i++) {
      await expect(client.open([range("a.nc")], [])).rejects.toThrow("it could not be loaded");
      expect(started).toHaveLength(i);
    }
  });

  test("a worker that falls silent is given up and replaced", async () => {
    const { client, started } = start((index) => new FakeWorker(index > 0), 50);
    await expect(client.open([range("a.nc")], [])).rejects.toThrow("it has not answered for");
    expect((await client.open([range("a.nc")], [])).opened).toHaveLength(1);
    expect(started).toHaveLength(2);
  });

  test("a file that its reader never ends with costs the worker, and no other file", async () => {
    const { client, started } = start(() => new FakeWorker(), 10_000, 60);
    await client.open([range("a.nc")], []);
    await expect(client.open([range("endless.nc")], [])).rejects.toThrow(
      "endless.nc could not be read within 0.06 s: it is probably damaged",
    );
    expect((await client.frame(PLACE, 0, { kind: "none" })).values).toHaveLength(2);
    expect(started).toHaveLength(2);
    expect(started[1].calls).toEqual(["open a.nc"]);
  });

  test("long work is not taken for death while the worker answers", async () => {
    const { client, started } = start(() => new FakeWorker(), 200);
    await client.open([range("a.nc")], []);
    started[0].frames = new Promise((resolve) => setTimeout(resolve, 600));
    expect((await client.frame(PLACE, 0, { kind: "none" })).values).toHaveLength(2);
    expect(started).toHaveLength(1);
  });

  test("after its end no call is taken", async () => {
    const { client } = start(() => new FakeWorker());
    client.end();
    await expect(client.close("a.nc")).rejects.toThrow("has been closed");
  });
});
