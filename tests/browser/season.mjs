/* Does the season ribbon do what it says: pointer, wheel, keys, range, tables, exports, a long search? */
import assert from "node:assert/strict";
import { spawnSync } from "node:child_process";
import path from "node:path";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, ROOT, open, planOf, settled, textOf } from "./browsers.mjs";

const iso = (page) => page.$eval('[data-input="time"]', (field) => field.value);
const quantity = (page, key) => page.$eval('[data-quantity="' + key + '"]', (cell) => Number(cell.dataset.value));

/** Waits until events, windows and nights are all found. */
async function searched(page) {
  await page.waitForFunction(() => Tailvane.desk.ask((desk) => desk.season_advance(0)) >= 1, { timeout: 60000 });
  await settled(page);
}

async function range(page, from, to) {
  await page.$eval('[data-bench="season"]', (bench) => (bench.open = true));
  await page.evaluate(
    (ends) => {
      for (const [name, text] of Object.entries(ends)) {
        const field = document.querySelector('[data-input="season-' + name + '"]');
        field.value = text;
        field.dispatchEvent(new Event("input", { bubbles: true }));
      }
      document.querySelector('[data-form="season"]').requestSubmit();
    },
    { from, to }
  );
  await settled(page);
}

/** The times of the table of events. */
const events = (page) => page.$$eval('[data-list="season-events"] button', (buttons) => buttons.map((button) => button.textContent));

/** A sum over the pixels of the ribbon, to see whether it was drawn anew. */
const drawn = (page) =>
  page.$eval('[data-view="season"]', (canvas) => {
    const { data } = canvas.getContext("2d").getImageData(0, 0, canvas.width, canvas.height);
    let sum = 0;
    for (let at = 0; at < data.length; at += 4) {
      sum = (sum * 31 + data[at] + 3 * data[at + 1] + 7 * data[at + 2]) % 1000000007;
    }
    return sum;
  });

/** What a page said, but for the browser's advice about the pixels that this test reads. */
const own = (noise) => noise.filter((line) => !line.includes("willReadFrequently"));

export default (context) =>
  describe("season", () => {
    test("pointer, wheel and keys move through the season; the ribbon stays while one scrubs", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await searched(page);
      const slider = await page.$('[data-control="season"]');
      const box = await slider.boundingBox();
      const before = await drawn(page);
      await page.mouse.move(box.x + box.width * 0.3, box.y + box.height * 0.4);
      await settled(page);
      const under = await textOf(page, '[data-show="season-under"]');
      assert.match(under, /^\d{4}-\d\d-\d\d \d\d:\d\d UTC .*orbit-plane angle/);
      await page.mouse.down();
      await page.mouse.move(box.x + box.width * 0.5, box.y + box.height * 0.4, { steps: 4 });
      await page.mouse.up();
      await settled(page);
      assert.equal(await drawn(page), before, "scrubbing draws the handle only");
      assert.match(await iso(page), /:00:00Z$/, "a long view is scrubbed by the hour");
      const middle = await page.evaluate(() => Tailvane.desk.ask((desk) => Date.parse(desk.season_table().from) + Date.parse(desk.season_table().to)) / 2);
      // A thumb is 16 px wide, and the track a thousand.
      assert.ok(Math.abs(Date.parse(await iso(page)) - middle) < 6 * 86400e3, await iso(page));

      await page.mouse.wheel({ deltaY: -600 });
      await settled(page);
      assert.notEqual(await drawn(page), before);
      assert.equal(await page.$eval('[data-act="season-whole"]', (button) => button.hidden), false);
      await page.click('[data-act="season-whole"]');
      await settled(page);
      assert.equal(await drawn(page), before, "the whole season again");

      await slider.focus();
      await page.keyboard.press("Home");
      for (const expected of (await events(page)).slice(0, 3)) {
        await page.keyboard.press("PageUp");
        await settled(page);
        const words = await slider.evaluate((element) => element.getAttribute("aria-valuetext"));
        assert.equal(words, expected);
      }
      await page.keyboard.press("PageDown");
      await settled(page);
      assert.equal(await slider.evaluate((element) => element.getAttribute("aria-valuetext")), (await events(page))[1]);
      await page.keyboard.press("+");
      await settled(page);
      assert.notEqual(await drawn(page), before);
      assert.deepEqual(own(noise), []);
      await page.close();
    });

    test("a typed range is taken and kept in the plan; a bad one is said and changes nothing", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await range(page, "2031-01-01T00:00:00Z", "2031-06-30T00:00:00Z");
      await searched(page);
      const plan = JSON.parse(await planOf(page));
      assert.deepEqual(plan.season, { from: "2031-01-01T00:00:00Z", to: "2031-06-30T00:00:00Z" });
      assert.match(await textOf(page, '[data-show="season-progress"]'), /outside this range/);
      const [picture, list] = [await drawn(page), await events(page)];
      for (const [from, to, field] of [
        ["2031-06-30T00:00:00Z", "2031-01-01T00:00:00Z", "to"],
        ["1600-01-01T00:00:00Z", "2031-01-01T00:00:00Z", "from"],
        ["1950-01-01T00:00:00Z", "2031-01-01T00:00:00Z", "to"],
        ["soon", "2031-01-01T00:00:00Z", "from"],
      ]) {
        await range(page, from, to);
        assert.match(await textOf(page, '[data-say="error"]'), new RegExp("season." + field), from + " to " + to);
        assert.equal(await page.$eval('[data-input="season-' + field + '"]', (input) => input.getAttribute("aria-invalid")), "true");
        assert.equal(await drawn(page), picture);
        assert.deepEqual(await events(page), list);
      }
      await page.select('[data-control="months"]', "orbit");
      await settled(page);
      assert.equal(await textOf(page, '[data-say="error"]'), "");
      assert.equal(JSON.parse(await planOf(page)).season, undefined);
      assert.deepEqual(own(noise), []);
      await page.close();
    });

    test("the tables hold what the command line gives, lead to their times, and leave as the same bytes", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const [from, to] = ["2031-01-01T00:00:00Z", "2031-06-30T00:00:00Z"];
      await range(page, from, to);
      await searched(page);
      const plan = await page.evaluate(() => Tailvane.desk.ask((desk) => desk.plan_json()));
      for (const [form, options] of [["csv", []], ["calendar", ["--calendar"]], ["plain", ["--table", "plain"]], ["markdown", ["--table", "markdown"]], ["wiki", ["--table", "wiki"]]]) {
        const run = spawnSync(path.join(ROOT, "target/release/tailvane"), ["season", "-", "--from", from, "--to", to, ...options], { input: plan, encoding: "utf8" });
        assert.equal(run.status, 0, run.stderr);
        assert.equal(await page.evaluate((name) => Tailvane.desk.ask((desk) => desk.season_text(name)), form), run.stdout, form);
        if (form === "csv") {
          assert.equal((await events(page)).length, run.stdout.trim().split("\n").length - 1);
        }
      }
      const rows = await page.$$('[data-list="season-events"] tr');
      const words = await Promise.all(rows.map((row) => row.$eval("th", (cell) => cell.firstChild.textContent)));
      const crossing = words.indexOf("orbit-plane crossing");
      assert.ok(crossing >= 0, words.join());
      await rows[crossing].$eval("button", (button) => button.click());
      await settled(page);
      assert.ok(Math.abs(await quantity(page, "observer_from_orbit_plane_deg")) < 0.01);
      await page.$eval('[data-act="season-csv"]', (button) => button.click());
      assert.match(await textOf(page, '[data-show="season-done"]'), /Saved as .*season\.csv/);
      await page.close();
    });

    test("a long search says how far it is, can be stopped and goes on", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await range(page, "2011-01-01T00:00:00Z", "2050-06-01T00:00:00Z");
      await page.waitForFunction(() => /\d %/.test(document.querySelector('[data-show="season-progress"]').textContent), { timeout: 20000 });
      await page.click('[data-act="season-stop"]');
      const done = () => page.evaluate(() => Tailvane.desk.ask((desk) => desk.season(900, 300, "").done));
      await settled(page);
      assert.match(await textOf(page, '[data-show="season-progress"]'), /not complete/);
      const stopped = await done();
      await new Promise((then) => setTimeout(then, 300));
      assert.equal(await done(), stopped);
      await page.click('[data-act="season-stop"]');
      await new Promise((then) => setTimeout(then, 300));
      assert.ok((await done()) > stopped);
      await page.close();
    });

    test("on a phone the ribbon lies under the sky, whole and drawn; the geocentre says that night needs a site", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS, { viewport: { width: 390, height: 844 } });
      const [sky, ribbon] = [await (await page.$('[data-view="sky"]')).boundingBox(), await (await page.$('[data-view="season"]')).boundingBox()];
      assert.ok(ribbon.y >= sky.y + sky.height && ribbon.width > 360 && ribbon.height > 200, JSON.stringify(ribbon));
      const before = await drawn(page);
      await page.evaluate(() => Tailvane.desk.change((desk) => desk.set_geocentre()));
      await searched(page);
      assert.notEqual(await drawn(page), before);
      await page.$eval('[data-curve="phase_angle_deg"]', (check) => check.click());
      await settled(page);
      const svg = await page.evaluate(() => Tailvane.desk.ask((desk) => desk.season_svg("paper")));
      assert.match(svg, /dark, comet up: needs a site/);
      assert.match(svg, /phase angle 0/);
      await page.close();
    });
  });
