/* Do the tails on the page follow the bench, the slider and the pointer, and agree with the command line? */
import assert from "node:assert/strict";
import { spawnSync } from "node:child_process";
import path from "node:path";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, ROOT, open, planOf, rested, settled, textOf, typeTime } from "./browsers.mjs";

const error = (page) => textOf(page, '[data-say="error"]');

async function openBench(page, name) {
  await page.$eval('[data-bench="' + name + '"]', (bench) => (bench.open = true));
  await page.$$eval("details.laws", (all) => all.forEach((details) => (details.open = true)));
  await settled(page);
}

/** Types a law and leaves the field. */
async function setLaw(page, key, value) {
  await page.$eval('[data-law="' + key + '"]', (input, text) => {
    input.value = text;
    input.dispatchEvent(new Event("input", { bubbles: true }));
    input.dispatchEvent(new Event("change", { bubbles: true }));
  }, value);
  await settled(page);
}

async function setLayer(page, name, on) {
  await page.$eval('[data-layer="' + name + '"]', (box, wanted) => {
    box.checked = wanted;
    box.dispatchEvent(new Event("change", { bubbles: true }));
  }, on);
  await settled(page);
}

/** The pixels of a drawing in short: a sum that any change changes, and the share of pixels unlike the commonest one. */
const pixels = (page, view) =>
  page.$eval('[data-view="' + view + '"]', (canvas) => {
    const data = canvas.getContext("2d").getImageData(0, 0, canvas.width, canvas.height).data;
    const counts = new Map();
    let sum = 0;
    for (let at = 0; at < data.length; at += 4) {
      const colour = (data[at] << 16) | (data[at + 1] << 8) | data[at + 2];
      sum = (Math.imul(sum, 31) + colour) | 0;
      counts.set(colour, (counts.get(colour) || 0) + 1);
    }
    return { sum, drawn: 1 - Math.max(...counts.values()) / (data.length / 4) };
  });

/** Leaves nothing but the dust picture among the layers. */
async function dustOnly(page) {
  for (const layer of ["ion", "syndynes", "synchrones", "neck_line", "toward_sun"]) {
    await setLayer(page, layer, false);
  }
}

function commandLine(args, plan) {
  const run = spawnSync(path.join(ROOT, "target/release/tailvane"), args, { input: plan, encoding: "utf8" });
  assert.equal(run.status, 0, run.stderr);
  return run.stdout;
}

export default (context) =>
  describe("tails", () => {
    test("every law of the bench has a range, a default, an effect, and goes into the plan", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "tails");
      const laws = await page.$$eval("[data-law]", (inputs) =>
        inputs.map((input) => ({ key: input.dataset.law, help: document.getElementById(input.getAttribute("aria-describedby")).textContent }))
      );
      assert.equal(laws.length, 22);
      for (const { key, help } of laws) {
        assert.match(help, / to .*, default /, key);
        assert.ok(help.length > 40, key + ": " + help);
        const [, least, greatest] = /(\S+) to (\S+), default/.exec(help).map((text) => Number(text.replace("\u2212", "-")));
        assert.ok(least < greatest, key + ": " + help);
      }
      const before = JSON.parse(await planOf(page));
      assert.equal(before.tails, undefined);
      await setLaw(page, "beta_least", "0.0001");
      await setLaw(page, "activity_start_days", "-90");
      const plan = JSON.parse(await planOf(page));
      assert.equal(plan.tails.beta_least, 0.0001);
      assert.equal(plan.tails.activity_start_days, -90);
      await page.click('[data-act="reset-tails"]');
      assert.equal(JSON.parse(await planOf(page)).tails, undefined);
      assert.equal(await page.$eval('[data-law="beta_least"]', (input) => input.value), "0.001");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a law changes the picture; a link brings it back", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      const before = await pixels(page, "sky");
      await openBench(page, "tails");
      await setLaw(page, "age_greatest_days", "45");
      await rested(page);
      const after = await pixels(page, "sky");
      assert.notEqual(after.sum, before.sum);
      const address = await page.evaluate(() => location.href);
      await page.close();
      const again = await open(context.browser, address);
      assert.equal(await again.page.$eval('[data-law="age_greatest_days"]', (input) => input.value), "45");
      await rested(again.page);
      assert.equal((await pixels(again.page, "sky")).sum, after.sum);
      await again.page.close();
    });

    test("a law out of its range is refused by name, and the picture stays", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "tails");
      await rested(page);
      const before = await pixels(page, "sky");
      const plan = await planOf(page);
      for (const [key, value] of [["beta_least", "-1"], ["beta_least", "2"], ["age_greatest_days", "0"], ["size_exponent", "many"], ["wind_slowest_km_s", "900"], ["outburst.middle_days", "5"], ["grain_density_g_cm3", ""]]) {
        await setLaw(page, key, value);
        await rested(page);
        assert.match(await error(page), new RegExp("tails\\." + key.split(".")[0]));
        assert.equal((await page.$$('[data-law][aria-invalid="true"]')).length, 1, key);
        assert.ok((await textOf(page, '[data-show="tails-done"]')).includes("refused"));
        assert.equal(await planOf(page), plan);
        // The message takes room from the sky, which is drawn smaller but drawn; once it is gone the picture is the same.
        assert.ok((await pixels(page, "sky")).drawn > 0.02);
        await page.click('[data-act="reset-tails"]');
        await rested(page);
        assert.equal((await pixels(page, "sky")).sum, before.sum, key);
      }
      await page.close();
    });

    test("each preset is accepted and differs from the others", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "tails");
      const names = await page.$$eval("[data-preset]", (buttons) => buttons.map((button) => button.dataset.preset));
      assert.ok(names.length >= 4);
      const plans = new Set();
      for (const name of names) {
        await page.$eval('[data-preset="' + name + '"]', (button) => button.click());
        await settled(page);
        assert.equal(await error(page), "", name);
        plans.add(JSON.stringify(JSON.parse(await planOf(page)).tails || {}));
      }
      assert.equal(plans.size, names.length);
      await page.close();
    });

    test("the dust picture is not empty, changes with the date, and goes with its layer", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "tails");
      await dustOnly(page);
      await rested(page);
      const on = await pixels(page, "sky");
      await setLayer(page, "dust", false);
      await rested(page);
      const off = await pixels(page, "sky");
      assert.ok(on.drawn > off.drawn + 0.02, on.drawn + " with, " + off.drawn + " without");
      await setLayer(page, "dust", true);
      await rested(page);
      assert.equal((await pixels(page, "sky")).sum, on.sum);
      await typeTime(page, "2031-05-05T00:00:00Z");
      await rested(page);
      assert.notEqual((await pixels(page, "sky")).sum, on.sum);
      // The tabs of one browser share what it keeps.
      await page.evaluate(() => localStorage.clear());
      await page.close();
    });

    test("every layer, the depth and the isophotes change the picture, and are kept", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "tails");
      await rested(page);
      for (const layer of ["ion", "syndynes", "synchrones", "toward_sun", "dust", "isophotes"]) {
        const before = await pixels(page, "sky");
        await setLayer(page, layer, layer === "isophotes");
        await rested(page);
        assert.notEqual((await pixels(page, "sky")).sum, before.sum, layer);
      }
      await setLayer(page, "dust", true);
      await rested(page);
      const before = await pixels(page, "sky");
      await page.select('[data-layer-choice="depth_mag"]', "3");
      await rested(page);
      assert.notEqual((await pixels(page, "sky")).sum, before.sum);
      await page.close();
      const again = await open(context.browser, PAGE_ADDRESS);
      assert.equal(await again.page.$eval('[data-layer="ion"]', (box) => box.checked), false);
      await again.page.evaluate(() => localStorage.clear());
      await again.page.close();
    });

    test("the ion axes are the command line's to the last digit", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const plan = await planOf(page);
      const shown = await page.$$eval("[data-ion]", (cells) => cells.map((cell) => cell.dataset.value));
      const rows = JSON.parse(commandLine(["ion", "-", "--json"], plan));
      const wanted = rows.flatMap((row) => ["axis_position_angle_deg", "angle_from_antisolar_deg", "aberration_deg"].map((key) => String(row[key])));
      assert.equal(shown.length, 9);
      assert.deepEqual(shown, wanted);
      await page.close();
    });

    test("the sentence is that of the command line's drawing", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const plan = await planOf(page);
      const drawing = path.join(ROOT, "target/page/sentence-" + context.name + ".svg");
      commandLine(["draw", "-", "--view", "sky", "--out", drawing], plan);
      const { readFileSync } = await import("node:fs");
      const svg = readFileSync(drawing, "utf8").replaceAll("&#39;", "'").replaceAll("&apos;", "'");
      const sentence = await textOf(page, '[data-say="sentence"]');
      assert.ok(sentence.length > 80);
      assert.ok(svg.includes(sentence), sentence);
      await page.close();
    });

    test("the first screen is an anti-tail night: old dust on the sunward side, by perspective, near the plane", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      assert.match(await textOf(page, '[data-say="headline"]'), /^Gas toward \d+°\. Dust from \d+° to \d+°\. Old dust also on the sunward side, toward \d+°\.$/);
      assert.match(await textOf(page, '[data-say="sentence"]'), /sunward tail tonight can be perspective/);
      const angle = await page.$eval('[data-quantity="observer_from_orbit_plane_deg"]', (cell) => Number(cell.dataset.value));
      assert.ok(Math.abs(angle) < 5);
      assert.match(await textOf(page, '[data-show="visibility"]'), /^Up in a dark sky/);
      await page.close();
    });

    test("the pointer names the grain that lands there, as the command line places it", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const plan = await planOf(page);
      // Where the command line sees a grain, on the default view: 5 degrees over the smaller side, north up, east left.
      const [header, row] = commandLine(["dust", "-", "--beta", "0.5", "--ages", "40"], plan).trim().split(/\r?\n/).map((line) => line.split(","));
      const value = (key) => Number(row[header.indexOf(key)]);
      const at = await page.$eval('[data-view="sky"]', (canvas) => {
        const area = canvas.getBoundingClientRect();
        return { left: area.left, top: area.top, width: area.width, height: area.height };
      });
      const scale = Math.min(at.width, at.height) / 5;
      await page.mouse.move(at.left + at.width / 2 - value("xi_deg") * scale, at.top + at.height / 2 - value("eta_deg") * scale);
      await settled(page);
      const words = await textOf(page, '[data-show="hover"]');
      const found = /beta ([\d.]+), .*\(([\d.]+) days ago\)/.exec(words);
      assert.ok(found, words);
      assert.ok(Math.abs(Number(found[1]) / 0.5 - 1) < 0.1, words);
      assert.ok(Math.abs(Number(found[2]) / 40 - 1) < 0.1, words);
      await page.close();
    });

    test("the orbit view and the map are drawn, worded, and follow the slider", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await openBench(page, "tails");
      await openBench(page, "orbit");
      await rested(page);
      const before = [await pixels(page, "orbit"), await pixels(page, "map")];
      const words = [await textOf(page, "#orbit-words"), await textOf(page, "#map-words")];
      assert.ok(before.every(({ drawn }) => drawn > 0.02));
      await page.focus('[data-control="season"]');
      await page.keyboard.press("PageUp");
      await rested(page);
      assert.notEqual((await pixels(page, "orbit")).sum, before[0].sum);
      assert.notEqual((await pixels(page, "map")).sum, before[1].sum);
      assert.notEqual(await textOf(page, "#orbit-words"), words[0]);
      assert.notEqual(await textOf(page, "#map-words"), words[1]);
      for (const view of ["orbit", "map"]) {
        await page.focus('[data-view="' + view + '"]');
        assert.equal(await page.evaluate(() => document.activeElement.dataset.view), view);
      }
      await page.close();
    });
  });
