import { spawnSync } from "node:child_process";
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import type { Browser, Page } from "playwright-core";
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, test } from "vitest";
import { openBrowser, openPage, ROOT, type RunningApp, startApp } from "./window.ts";

const SAMPLE = join(ROOT, "sample-data/invented-winter.nc");
let browser: Browser;
let app: RunningApp;
let folder: string;

beforeAll(async () => {
  browser = await openBrowser();
  folder = mkdtempSync(join(tmpdir(), "isohypse-e2e-"));
});
// Each test starts as a new user does: what a page of the test before writes late must not be found by the next.
beforeEach(async () => {
  app = await startApp();
});
afterEach(() => app.stop());
afterAll(async () => {
  await browser.close();
  rmSync(folder, { recursive: true, force: true });
});

const testId = (id: string): string => `[data-testid="${id}"]`;
/** Text of an element, once it is there. */
async function textOf(page: Page, id: string): Promise<string> {
  return (await page.locator(testId(id)).first().textContent()) ?? "";
}
/** Wait until the chart and the waves stand. */
async function settled(page: Page): Promise<void> {
  await page.locator(testId("chart")).waitFor();
  await page.locator(`${testId("headline")}[data-waiting="false"]`).waitFor();
  await page.locator(testId("wave-2-amplitude")).waitFor();
}
async function numberIn(page: Page, id: string): Promise<number> {
  return Number(await page.locator(testId(id)).getAttribute("data-value"));
}
/** Wait until the case on the disk says so. */
async function autosaved(state: string, holds: (kept: { cursor: { step: number } }) => boolean): Promise<void> {
  await expect
    .poll(
      () => {
        const path = join(state, "autosave.json");
        return existsSync(path) && holds(JSON.parse(readFileSync(path, "utf8")));
      },
      { timeout: 15_000 },
    )
    .toBe(true);
}
/** What a download holds. */
async function downloaded(
  page: Page,
  act: () => Promise<void>,
): Promise<{ name: string; bytes: Buffer; path: string }> {
  const [download] = await Promise.all([page.waitForEvent("download"), act()]);
  const path = join(folder, download.suggestedFilename());
  await download.saveAs(path);
  return { name: download.suggestedFilename(), bytes: readFileSync(path), path };
}
/** Drop files on the window, as a file manager does. */
async function drop(page: Page, files: readonly { name: string; bytes: Buffer }[]): Promise<void> {
  const transfer = await page.evaluateHandle(
    (list) => {
      const data = new DataTransfer();
      for (const { name, text } of list)
        data.items.add(new File([Uint8Array.from(atob(text), (c) => c.charCodeAt(0))], name));
      return data;
    },
    files.map(({ name, bytes }) => ({ name, text: bytes.toString("base64") })),
  );
  await page.locator(".window").dispatchEvent("dragover", { dataTransfer: transfer });
  await page.locator(".window").dispatchEvent("drop", { dataTransfer: transfer });
}

describe("the sample case", () => {
  test("opens at the start, says that it is invented, and carries the caution", async () => {
    const { page, errors } = await openPage(browser, app.url);
    await settled(page);
    expect(await page.locator(".tag").first().textContent()).toBe("invented");
    expect(await textOf(page, "caution")).toContain("Guidance, not a warning");
    expect(await textOf(page, "headline")).toMatch(/^k \d leads at 55°N: \d+ gpm, ridge/);
    await page.locator(testId("ribbon")).waitFor();
    await page.waitForTimeout(3000); // Plotly loads after the first chart; it must not trip over the page's policy
    expect(errors).toEqual([]);
    await page.context().close();
  });

  test("batch, run on the recipe that the window writes, gives the number on the screen", async () => {
    const { page } = await openPage(browser, app.url);
    await settled(page);
    const recipe = await downloaded(page, async () => {
      await page.keyboard.press("e");
      await page.locator(testId("export-recipe")).click();
    });
    const out = join(folder, "batch");
    const run = spawnSync(process.execPath, [join(ROOT, "app/launch/batch.mjs"), recipe.path, SAMPLE, "--out", out], {
      encoding: "utf8",
    });
    expect(run.status, run.stderr).toBe(0);
    const rows = readFileSync(join(out, "waves.csv"), "utf8")
      .trim()
      .split("\n")
      .map((line) => line.split(","));
    const column = (name: string): number => (rows[0] as string[]).findIndex((head) => head.startsWith(name));
    const date = await textOf(page, "date");
    expect(date).toBe("1 Mar 2001");
    for (const k of [1, 2, 3, 5]) {
      const row = rows.find(
        (cells) => cells[0] === "2001-03-01T00:00:00Z" && Number(cells[column("wavenumber")]) === k,
      ) as string[];
      expect(await numberIn(page, `wave-${k}-amplitude`)).toBe(Number(row[column("amplitude")]));
      // The browser's and Node's own arctangents may differ in the last place or two
      const ridge = Number(row[column("ridge_longitude")]);
      expect(Math.abs((await numberIn(page, `wave-${k}-ridge`)) - ridge)).toBeLessThanOrEqual(360 * 2 ** -51);
      expect(await numberIn(page, `wave-${k}-share`)).toBe(Number(row[column("variance_share")]));
    }
    await page.context().close();
  });

  test("time goes by key, by button and along the ribbon", async () => {
    const { page } = await openPage(browser, app.url);
    await settled(page);
    await page.keyboard.press("Home");
    await page.getByText("1 Jan 2001").waitFor();
    for (let i = 0; i < 3; i++) await page.keyboard.press(".");
    await page.getByText("4 Jan 2001").waitFor();
    await page.keyboard.press(",");
    await page.getByText("3 Jan 2001").waitFor();
    await page.getByLabel("A step later").click();
    await page.getByText("4 Jan 2001").waitFor();
    const ribbon = page.locator(testId("ribbon"));
    await ribbon.waitFor();
    const box = await ribbon.boundingBox();
    const [top, height] = [
      Number(await ribbon.getAttribute("data-top")),
      Number(await ribbon.getAttribute("data-height")),
    ];
    if (box === null) throw new Error("The ribbon has no box.");
    const at = (day: number): number => box.y + top + (height * day) / 59;
    await page.mouse.click(box.x + box.width / 2, at(31));
    await page.getByText("1 Feb 2001").waitFor();
    await page.mouse.move(box.x + box.width / 2, at(31));
    await page.mouse.down();
    await page.mouse.move(box.x + box.width / 2, at(40), { steps: 6 });
    await page.mouse.up();
    await page.getByText("10 Feb 2001").waitFor();
    expect(await ribbon.getAttribute("aria-valuenow")).toBe("40");
    await settled(page);
    await page.context().close();
  });

  test("band, background, level and what the waves are of change the numbers", async () => {
    const { page } = await openPage(browser, app.url);
    await settled(page);
    const seen = new Set([await numberIn(page, "wave-2-amplitude")]);
    const changed = async (act: () => Promise<unknown>): Promise<void> => {
      await act();
      await expect
        .poll(async () => !seen.has(await numberIn(page, "wave-2-amplitude")), { timeout: 15_000 })
        .toBe(true);
      await settled(page);
      seen.add(await numberIn(page, "wave-2-amplitude"));
    };
    await changed(() => page.locator(testId("choose-latitude")).selectOption("50 60"));
    await expect.poll(() => textOf(page, "headline")).toContain("50–60°N");
    await changed(async () => {
      await page.locator(testId("choose-latitude")).selectOption("other");
      await page.locator(testId("band-from")).fill("35");
      await page.locator(testId("band-to")).fill("42.5");
      await page.getByRole("button", { name: "Set" }).click();
    });
    await expect.poll(() => textOf(page, "headline")).toContain("35–42.5°N");
    await changed(() => page.locator(testId("choose-level")).selectOption("250"));
    await changed(() => page.locator(testId("choose-of")).selectOption("field"));
    await changed(async () => {
      await page.locator(testId("choose-of")).selectOption("anomaly");
      await page.locator(testId("choose-background")).selectOption({ label: "running mean, 15 days" });
      await page.keyboard.press("Escape");
      for (let i = 0; i < 20; i++) await page.getByLabel("A step earlier").click();
    });
    await page.context().close();
  });

  test("the bars at the cursor add up to the anomaly, wherever the cursor goes", async () => {
    const { page } = await openPage(browser, app.url);
    await settled(page);
    for (const key of ["ArrowUp", "ArrowRight", "ArrowRight"]) await page.keyboard.press(key);
    const sum = page.locator(testId("share-bars"));
    await sum.waitFor();
    const words = (await sum.getAttribute("aria-label")) ?? "";
    const parts = [...words.matchAll(/(?:mean|k \d\+?) ([−+]?)([\d.]+)/g)].map(
      (match) => (match[1] === "−" ? -1 : 1) * Number(match[2]),
    );
    expect(parts.length).toBe(10);
    const total = Number(await sum.getAttribute("data-total"));
    // Ten whole numbers, each rounded by at most a half
    expect(Math.abs(parts.reduce((a, b) => a + b, 0) - total)).toBeLessThanOrEqual(5.5);
    const chart = page.locator(testId("chart"));
    const before = await chart.getAttribute("aria-label");
    const box = await chart.boundingBox();
    if (box === null) throw new Error("The chart has no box.");
    await page.mouse.click(box.x + box.width / 2 + 60, box.y + box.height / 2 + 20);
    await expect.poll(() => chart.getAttribute("aria-label")).not.toBe(before);
    await page.context().close();
  });

  test("night and day, belt and polar, south and north, cards and keys", async () => {
    const { page, errors } = await openPage(browser, app.url, { width: 1280, height: 800 });
    await settled(page);
    const theme = () => page.evaluate(() => document.documentElement.dataset.theme);
    const was = await theme();
    await page.keyboard.press("n");
    await expect.poll(theme).not.toBe(was);
    await page.keyboard.press("n");
    await expect.poll(theme).toBe(was);
    await page.keyboard.press("h");
    await page.locator(`${testId("segment-belt")}[aria-pressed="true"]`).waitFor();
    await page.keyboard.press("g");
    await page.locator(`${testId("segment-south")}[aria-pressed="true"]`).waitFor();
    await page.keyboard.press("g");
    await page.keyboard.press("h");
    for (const [key, card] of [
      ["?", "keys"],
      ["m", "method"],
      ["f", "files"],
      ["e", "export"],
    ] as const) {
      await page.keyboard.press(key);
      await page.locator(testId(`card-${card}`)).waitFor();
      await page.keyboard.press("Escape");
      await page.locator(testId(`card-${card}`)).waitFor({ state: "detached" });
    }
    await page.keyboard.press("m");
    const method = await textOf(page, "card-method");
    for (const word of ["zonal-waves", "options", "record mean", "valid", "source", "invented-winter.nc", "at cursor"])
      expect(method).toContain(word);
    expect(errors).toEqual([]);
    await page.context().close();
  });

  test("the chart leaves as PNG and as SVG, with its caption and caution", async () => {
    const { page } = await openPage(browser, app.url);
    await settled(page);
    const exported = (what: string) =>
      downloaded(page, async () => {
        await page.keyboard.press("e");
        await page.locator(testId(`export-${what}`)).click();
      });
    const png = await exported("png");
    expect(png.bytes.subarray(1, 4).toString()).toBe("PNG");
    const svg = (await exported("svg")).bytes.toString();
    expect(svg).toContain("Guidance, not a warning");
    expect(svg).toContain("invented-winter.nc");
    const parsed = await page.evaluate(
      (text) => new DOMParser().parseFromString(text, "image/svg+xml").querySelector("parsererror")?.textContent ?? "",
      svg,
    );
    expect(parsed).toBe("");
    const csv = (await exported("csv")).bytes.toString().split("\n");
    expect(csv[0]).toContain("amplitude (gpm)");
    expect(csv).toHaveLength(10);
    await page.context().close();
  });
});

describe("files", () => {
  test("a file through the file input; a damaged one gives the words, and the open case stays", async () => {
    const state = mkdtempSync(join(tmpdir(), "isohypse-state-"));
    const own = await startApp([], state);
    const { page } = await openPage(browser, own.url);
    await settled(page);
    await page
      .locator(testId("file-input"))
      .setInputFiles({ name: "winter.nc", mimeType: "application/x-netcdf", buffer: readFileSync(SAMPLE) });
    await page.getByText("winter.nc", { exact: true }).first().waitFor();
    await settled(page);
    const number = await numberIn(page, "wave-3-amplitude");
    const whole = readFileSync(SAMPLE);
    const cut = Buffer.from(whole.subarray(0, 300));
    await page.locator(testId("file-input")).setInputFiles({ name: "cut.nc", mimeType: "", buffer: cut });
    const notice = page.locator(testId("notice-error"));
    await notice.waitFor();
    const words = (await notice.textContent()) ?? "";
    expect(words).toContain("cut.nc was not opened");
    expect(words).toMatch(/byte \d+/);
    await page.getByRole("button", { name: "Dismiss" }).click();
    await page
      .locator(testId("file-input"))
      .setInputFiles({ name: "notes.txt", mimeType: "text/plain", buffer: Buffer.from("hello, this is text") });
    await notice.waitFor();
    expect(await notice.textContent()).toContain("notes.txt is text");
    expect(await numberIn(page, "wave-3-amplitude")).toBe(number);

    // Saved, changed, loaded again from the saved file
    await page.getByRole("button", { name: "Dismiss" }).click();
    await page.keyboard.press("Home");
    await page.locator(testId("choose-latitude")).selectOption("60 60");
    await expect.poll(() => textOf(page, "headline")).toContain("60°N");
    const saved = await downloaded(page, () => page.keyboard.press("s"));
    expect(JSON.parse(saved.bytes.toString())).toMatchObject({ isohypse: 1, kind: "case", waves: { band: [60, 60] } });
    await page.locator(testId("choose-latitude")).selectOption("45 45");
    await expect.poll(() => textOf(page, "headline")).toContain("45°N");
    await page.locator(testId("file-input")).setInputFiles(saved.path);
    await expect.poll(() => textOf(page, "headline")).toContain("60°N");
    await page.locator(testId("saved")).waitFor();
    await autosaved(state, ({ cursor }) => cursor.step === 0);

    // The page is gone without a word, as in a crash; the next start asks for the file that came without a place.
    await page.context().close();
    await own.stop();
    const again = await startApp([], state);
    const next = await openPage(browser, again.url);
    await next.page.locator(testId("awaited")).waitFor();
    expect(await textOf(next.page, "awaited")).toContain("Choose winter.nc again");
    await next.page.locator(testId("file-input")).setInputFiles({ name: "winter.nc", mimeType: "", buffer: whole });
    await settled(next.page);
    expect(await textOf(next.page, "headline")).toContain("60°N");
    expect(await textOf(next.page, "date")).toBe("1 Jan 2001");
    await next.page.context().close();
    await again.stop();
    rmSync(state, { recursive: true, force: true });
  });

  test("a file by drop, and several at once", async () => {
    const { page } = await openPage(browser, app.url);
    await settled(page);
    const bytes = readFileSync(SAMPLE);
    await drop(page, [
      { name: "first.nc", bytes },
      { name: "second.nc", bytes },
    ]);
    await page.getByText("2 files").waitFor();
    await settled(page);
    await page.keyboard.press("f");
    const files = await textOf(page, "card-files");
    expect(files).toContain("first.nc");
    expect(files).toContain("second.nc");
    expect(files).toContain("standard name geopotential_height");
    await page.context().close();
  });

  test("named on the command line, a file opens, and is found again after a restart", async () => {
    const state = mkdtempSync(join(tmpdir(), "isohypse-state-"));
    const named = join(folder, "named.nc");
    writeFileSync(named, readFileSync(SAMPLE));
    const first = await startApp([named, join(folder, "nothing.nc")], state);
    const one = await openPage(browser, first.url);
    await settled(one.page);
    expect(await textOf(one.page, "notice-error")).toContain("nothing.nc: no such file");
    await one.page.keyboard.press("Home");
    await one.page.getByText("1 Jan 2001").waitFor();
    await autosaved(state, ({ cursor }) => cursor.step === 0);
    await one.page.context().close();
    await first.stop();
    const second = await startApp([], state);
    const two = await openPage(browser, second.url);
    await settled(two.page);
    expect(await two.page.getByText("named.nc").first().isVisible()).toBe(true);
    expect(await textOf(two.page, "date")).toBe("1 Jan 2001");
    await two.page.context().close();
    await second.stop();
    rmSync(state, { recursive: true, force: true });
  });

  test("ERA-Interim's January waves at 60°N, as numpy has them", async (context) => {
    const data = process.env.ISOHYPSE_DATA ?? join(ROOT, "../shared/data");
    const file = join(data, "eraint_uvz.nc");
    if (!existsSync(file)) return context.skip(`${file} is not there`);
    const own = await startApp([file]);
    const { page } = await openPage(browser, own.url);
    await settled(page);
    await page.locator(testId("choose-latitude")).selectOption("60 60");
    await expect.poll(() => textOf(page, "headline")).toContain("60°N");
    await settled(page);
    expect(await textOf(page, "date")).toBe("month 1");
    // numpy.fft on the file's own numbers: tests/app/batch/reference/monthly_waves.py
    const expected = { 1: [46.8, 27.9], 2: [85.1, 31.2], 3: [57.9, 107.6] } as const;
    for (const k of [1, 2, 3] as const) {
      expect(Math.abs((await numberIn(page, `wave-${k}-amplitude`)) - expected[k][0])).toBeLessThan(0.1);
      expect(Math.abs((await numberIn(page, `wave-${k}-ridge`)) - expected[k][1])).toBeLessThan(0.1);
    }
    await page.context().close();
    await own.stop();
  });

  test("an ensemble in GRIB: the member and level that are chosen, as batch has them", async (context) => {
    const data = process.env.ISOHYPSE_DATA ?? join(ROOT, "../shared/data");
    const file = join(data, "era5_eda_z_t_3deg_10memb.grib");
    if (!existsSync(file)) return context.skip(`${file} is not there`);
    const own = await startApp([file]);
    const { page, errors } = await openPage(browser, own.url);
    await settled(page);
    const before = await numberIn(page, "wave-2-amplitude");
    await page.locator(testId("choose-member")).selectOption("7");
    await expect.poll(() => numberIn(page, "wave-2-amplitude"), { timeout: 15_000 }).not.toBe(before);
    const atFirst = await numberIn(page, "wave-2-amplitude");
    await page.locator(testId("choose-level")).selectOption("850");
    await expect.poll(() => numberIn(page, "wave-2-amplitude"), { timeout: 15_000 }).not.toBe(atFirst);
    await settled(page);
    const recipe = await downloaded(page, async () => {
      await page.keyboard.press("e");
      await page.locator(testId("export-recipe")).click();
    });
    expect(JSON.parse(recipe.bytes.toString()).results[0]).toMatchObject({ level: 850, member: 7 });
    const out = join(folder, "ensemble");
    const run = spawnSync(process.execPath, [join(ROOT, "app/launch/batch.mjs"), recipe.path, file, "--out", out], {
      encoding: "utf8",
    });
    expect(run.status, run.stderr).toBe(0);
    const [head = "", ...lines] = readFileSync(join(out, "waves.csv"), "utf8").trim().split("\n");
    const column = (name: string): number => head.split(",").findIndex((one) => one.startsWith(name));
    const rows = lines.map((line) => line.split(","));
    for (const k of [1, 2, 3, 4]) {
      const row = rows.find(
        (cells) =>
          cells[column("member")] === "7" &&
          cells[column("time")] === "2017-01-02T12:00:00Z" &&
          Number(cells[column("wavenumber")]) === k,
      ) as string[];
      expect(await numberIn(page, `wave-${k}-amplitude`)).toBe(Number(row[column("amplitude")]));
    }
    expect(errors).toEqual([]);
    await page.context().close();
    await own.stop();
  });

  test("netCDF-4 and a damaged GRIB file through the file input: what is whole is read, what is lost is told", async (context) => {
    const data = process.env.ISOHYPSE_DATA ?? join(ROOT, "../shared/data");
    const [four, damaged] = [
      join(data, "sresa1b_ncar_ccsm3-example.4.nc"),
      join(data, "era5_corrupted_second_msg.grib"),
    ];
    if (!existsSync(four) || !existsSync(damaged)) return context.skip(`${four} or ${damaged} is not there`);
    const { page, errors } = await openPage(browser, app.url);
    await settled(page);
    await page.locator(testId("file-input")).setInputFiles([four, damaged]);
    await expect.poll(() => textOf(page, "do-files"), { timeout: 15_000 }).toContain("2 files");
    await page.keyboard.press("f");
    const files = await textOf(page, "card-files");
    expect(files).toContain("netCDF-4 (HDF5)");
    expect(files).toContain("the message at byte 0 is damaged");
    expect(files).toContain("17 levels, 1000 to 10 hPa");
    expect(errors).toEqual([]);
    await page.context().close();
  });
});
