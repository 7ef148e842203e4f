/* Do the Night and Board benches show the command line's night, sort, and say what is missing? */
import assert from "node:assert/strict";
import { spawnSync } from "node:child_process";
import path from "node:path";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, ROOT, open, paste, planOf, rested, settled, textOf } from "./browsers.mjs";

const openBench = async (page, ...names) => {
  await page.$$eval(".bench", (all, wanted) => all.forEach((bench) => (bench.open = wanted.includes(bench.dataset.bench))), names);
  await settled(page);
};

const core = (page, act, ...values) =>
  page.evaluate((name, given) => Tailvane.desk.ask((desk) => desk[name](...given)), act, values);

const site = (page, latitude) =>
  page.evaluate((lat) => void Tailvane.desk.change((desk) => desk.set_site({ name: "Invented hill", longitude_deg: "23.4", latitude_deg: lat, height_m: "640" })), latitude);

/** Three invented comets; the second has a name that a spreadsheet would take for a formula. */
const COMETS = ["Invented A", "=1+2", "Invented C"]
  .map((name, at) => "name = " + name + "\nT = 2031-07-04.5 TT\nq = 0." + (6 + at) + "\ne = 1.0\nperi = " + 60 * at + "\nnode = 40\ni = 60\nH = " + (9 - at) + "\nphotometric index n = 4\n")
  .join("\n");

export default (context) =>
  describe("night", () => {
    test("the night on the page is the command line's, to the last byte", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "night");
      const plan = await planOf(page);
      const run = spawnSync(path.join(ROOT, "target/release/tailvane"), ["night", "-"], { input: plan, encoding: "utf8" });
      assert.equal(run.status, 0, run.stderr);
      assert.equal(await core(page, "night_csv"), run.stdout);
      // The table shows the events of those rows.
      const [header, ...lines] = run.stdout.trim().split("\n").map((line) => line.split(","));
      const events = lines.filter((fields) => fields[header.indexOf("event")]);
      const shown = await page.$$eval('[data-list="night"] [data-cell="altitude_deg"]', (cells) => cells.map((cell) => cell.dataset.value));
      assert.deepEqual(shown, events.map((fields) => fields[header.indexOf("altitude_deg")]));
      // A press on a time goes there; the best time lies in its window.
      await page.click('[data-list="night"] tbody tr:nth-child(3) button');
      await page.click('[data-act="night-best"]');
      await settled(page);
      assert.match(await textOf(page, "#horizon-words"), /stands \d+° up/);
      for (const view of ["night", "horizon"]) {
        const box = await (await page.$('[data-view="' + view + '"]')).boundingBox();
        assert.ok(box.width > 200 && box.height > 200, view);
        assert.ok(await page.$eval('[data-view="' + view + '"]', (canvas) => document.getElementById(canvas.getAttribute("aria-describedby").split(" ")[0]).textContent.length > 40));
      }
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("limits, dates and polar sites are taken or refused in words", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "night");
      const law = (key, value) =>
        page.evaluate((k, v) => {
          document.querySelector('[data-night="' + k + '"]').value = v;
          document.querySelector('[data-form="night"]').requestSubmit();
        }, key, value);
      await law("pixel_scale_arcsec", "2");
      await settled(page);
      assert.match(await textOf(page, '[data-show="exposure"]'), /At 2″ a pixel it moves 1 px in \d+/);
      await law("sun_below_deg", "40");
      await settled(page);
      assert.match(await textOf(page, '[data-say="error"]'), /night\.sun_below_deg/);
      const date = (text) =>
        page.evaluate((typed) => {
          document.querySelector('[data-input="night-date"]').value = typed;
          document.querySelector('[data-form="night-date"]').requestSubmit();
        }, text);
      await date("2200-01-01");
      assert.match(await textOf(page, '[data-say="error"]'), /2100-12-31/);
      await date("2031-06-21");
      await site(page, "78");
      await settled(page);
      assert.match(await textOf(page, '[data-list="night-absences"]') + (await textOf(page, '[data-say="night-best"]')), /does not set/);
      await page.evaluate(() => void Tailvane.desk.change((desk) => desk.set_geocentre()));
      await settled(page);
      assert.match(await textOf(page, '[data-show="night-none"]'), /needs a site/);
      await page.close();
    });

    test("the board sorts, takes a comet, and leaves no formula in its file", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await paste(page, COMETS);
      await openBench(page, "board");
      await rested(page);
      assert.match(await textOf(page, '[data-show="board-none"]'), /give one under Observer/);
      await site(page, "37.1");
      await page.$eval('[data-control="board-up"]', (box) => (box.checked = false));
      await rested(page);
      await page.waitForFunction(() => document.querySelector('[data-show="board-progress"]').textContent === "" && document.querySelectorAll('[data-list="board"] tbody tr').length === 3, { timeout: 20000 });
      const column = (key) => page.$$eval('[data-list="board"] [data-cell="' + key + '"]', (cells) => cells.map((cell) => cell.dataset.value));
      const rising = await column("total_magnitude");
      assert.deepEqual(rising, [...rising].sort((a, b) => a - b));
      const head = '[data-column="elongation_deg"]';
      await page.$eval(head + " button", (button) => button.click());
      await page.$eval(head + " button", (button) => button.click());
      const falling = await column("elongation_deg");
      assert.deepEqual(falling, [...falling].sort((a, b) => b - a));
      assert.equal(await page.$eval(head, (cell) => cell.getAttribute("aria-sort")), "descending");
      assert.ok((await column("sunward_dust")).every((words) => words !== ""));
      const csv = await core(page, "board_text", "csv");
      assert.ok(csv.includes("\r\n'=1+2,"), csv);
      await page.$eval('[data-list="board"] tbody tr:nth-child(2) button', (button) => button.click());
      await settled(page);
      const name = await page.$eval('[data-list="board"] tbody tr:nth-child(2) button', (button) => button.textContent);
      assert.equal(await textOf(page, '[data-show="comet"]'), name);
      assert.deepEqual(noise, []);
      await page.close();
    });
  });
