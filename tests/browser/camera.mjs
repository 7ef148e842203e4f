/* Can a camera be typed, dragged, turned, fitted and put on a card, and does the page agree with the command line? */
import assert from "node:assert/strict";
import { spawnSync } from "node:child_process";
import path from "node:path";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, ROOT, open, planOf, rested, settled, textOf } from "./browsers.mjs";

const camera = async (page) => JSON.parse(await planOf(page)).camera;

function commandLine(plan) {
  const run = spawnSync(path.join(ROOT, "target/release/tailvane"), ["camera", "-", "--json"], { input: plan, encoding: "utf8" });
  assert.equal(run.status, 0, run.stderr);
  return JSON.parse(run.stdout)[0];
}

async function type(page, values) {
  await page.evaluate((typed) => {
    for (const [key, value] of Object.entries(typed)) {
      document.querySelector('[data-camera="' + key + '"]').value = value;
    }
    document.querySelector('[data-form="camera"]').requestSubmit();
  }, values);
  await settled(page);
}

/** Where on the page the core finds this grip: a scan of the canvas. */
const find = (page, grip) =>
  page.evaluate((wanted) => {
    const { clientWidth: width, clientHeight: height } = document.querySelector('[data-view="sky"]');
    const area = document.querySelector('[data-view="sky"]').getBoundingClientRect();
    for (let y = 6; y < height; y += 6) {
      for (let x = 6; x < width; x += 6) {
        if (Tailvane.desk.ask((desk) => desk.camera_grip(x, y, 4)) === wanted) {
          return [area.left + x, area.top + y];
        }
      }
    }
    return null;
  }, grip);

async function drag(page, [x, y], right, down) {
  await page.mouse.move(x, y);
  await page.mouse.down();
  await page.mouse.move(x + right, y + down, { steps: 3 });
  await page.mouse.up();
  await settled(page);
}

export default (context) =>
  describe("camera", () => {
    test("a camera is placed by hand, by key and by fit, and refused where it is wrong", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await page.$eval('[data-bench="camera"]', (bench) => (bench.open = true));
      await settled(page);
      const first = await camera(page);
      assert.equal(first.name, "Invented camera");

      await drag(page, await find(page, "outline"), 40, 25);
      const moved = await camera(page);
      assert.ok(Math.hypot(moved.nucleus_right_px - first.nucleus_right_px, moved.nucleus_up_px - first.nucleus_up_px) > 50);
      assert.equal(moved.image_up_position_angle_deg, first.image_up_position_angle_deg);
      await drag(page, await find(page, "handle"), 60, 10);
      const turned = await camera(page);
      assert.ok(Math.abs(turned.image_up_position_angle_deg - first.image_up_position_angle_deg) > 2);

      await page.focus('[data-view="sky"]');
      await page.keyboard.press("[");
      const keyed = await camera(page);
      assert.ok(Math.abs(keyed.image_up_position_angle_deg - turned.image_up_position_angle_deg - 1) < 0.06);
      await page.keyboard.down("Shift");
      await page.keyboard.press("ArrowLeft");
      await page.keyboard.up("Shift");
      assert.notEqual((await camera(page)).nucleus_right_px, keyed.nucleus_right_px);

      await type(page, { pixels_wide: "0" });
      assert.match(await textOf(page, '[data-say="error"]'), /pixels_wide.*0 pixels.*1 to 100000/);
      assert.equal(await page.$eval('[data-camera="pixels_wide"]', (field) => field.getAttribute("aria-invalid")), "true");
      await type(page, { pixels_wide: "6000", image_up_position_angle_deg: "NaN" });
      assert.match(await textOf(page, '[data-say="error"]'), /image_up_position_angle_deg.*NaN/);
      await type(page, { image_up_position_angle_deg: "77", mirrored: "yes" });
      assert.equal(await textOf(page, '[data-say="error"]'), "");

      await page.$eval('[data-form="fit"]', (form) => form.requestSubmit());
      await settled(page);
      assert.match(await textOf(page, '[data-show="fit-done"]'), /^Held, with \d+ pixels/);
      await page.$eval('[data-fit="ion_length_deg"]', (field) => (field.value = "9"));
      await page.$eval('[data-form="fit"]', (form) => form.requestSubmit());
      await settled(page);
      assert.match(await textOf(page, '[data-show="fit-done"]'), /No placement of Invented camera does.*focal length of [\d.]+ mm/);

      // What the page says of the antisolar direction is what the command line computes.
      const plan = await planOf(page);
      const row = commandLine(plan);
      const words = await page.$eval("#camera-words", (list) => list.textContent);
      const [, angle, sense] = /Antisolar[\d.]+°: (\d+)° (counter-clockwise|clockwise)/.exec(words);
      const clockwise = sense === "clockwise" ? Number(angle) : 360 - Number(angle);
      assert.ok(Math.abs(clockwise - row.antisolar_clockwise_from_up_deg) <= 0.51, words);
      assert.ok((await page.$$eval('[data-list="hours"] tr', (rows) => rows.length)) > 5);

      await page.click('[data-act="keep-camera"]');
      await page.click('[data-act="remove-camera"]');
      await rested(page);
      assert.equal(await camera(page), undefined);
      await page.click('[data-list="cameras"] .pick');
      assert.equal((await camera(page)).mirrored, true);

      await page.click('[data-act="camera-up"]');
      await settled(page);
      assert.equal(await page.$eval('[data-act="camera-up"]', (button) => button.getAttribute("aria-pressed")), "true");
      await page.click('[data-act="show-card"]');
      await settled(page);
      const card = await page.$eval('[data-view="card"]', (box) => box.textContent);
      assert.match(card, /2031 July 20\.83 UT.*2031-07-20T20:00:00Z.*from image up/s);

      // A print that is blocked is said.
      await page.evaluate(() => {
        window.print = () => {};
        document.querySelector('[data-act="print-card"]').click();
      });
      await new Promise((done) => setTimeout(done, 1300));
      assert.match(await textOf(page, '[data-show="card-done"]'), /blocked.*SVG/);
      assert.deepEqual(noise, []);
      await page.close();
    });
  });
