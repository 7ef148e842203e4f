/* Does the time control do what it says, by pointer, keys, typing and play? */
import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, open, rested, settled, textOf, typeTime } from "./browsers.mjs";

const iso = (page) => page.$eval('[data-input="time"]', (field) => field.value);
const hours = (later, earlier) => (Date.parse(later) - Date.parse(earlier)) / 3600000;

async function pressed(page, key, shift = false) {
  const before = await iso(page);
  if (shift) {
    await page.keyboard.down("Shift");
  }
  await page.keyboard.press(key);
  if (shift) {
    await page.keyboard.up("Shift");
  }
  await settled(page);
  return hours(await iso(page), before);
}

export default (context) =>
  describe("time", () => {
    test("arrow keys step an hour, with Shift a day; Home and End go to the ends", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await page.focus('[data-control="season"]');
      assert.equal(await pressed(page, "ArrowRight"), 1);
      assert.equal(await pressed(page, "ArrowLeft"), -1);
      assert.equal(await pressed(page, "ArrowRight", true), 24);
      assert.equal(await pressed(page, "ArrowLeft", true), -24);
      const table = await page.evaluate(() => Tailvane.desk.ask((desk) => desk.season_table()));
      await page.keyboard.press("Home");
      await settled(page);
      assert.equal(await iso(page), table.from);
      await page.keyboard.press("End");
      await settled(page);
      assert.equal(await iso(page), table.to);
      const span = hours(table.to, table.from) / 24;
      assert.ok(span > 170 && span < 740, "the season spans " + span + " days");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("the slider tells its time in words and follows the pointer", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const slider = await page.$('[data-control="season"]');
      const box = await slider.boundingBox();
      const before = await iso(page);
      await page.mouse.move(box.x + box.width * 0.3, box.y + box.height / 2);
      await page.mouse.down();
      await page.mouse.move(box.x + box.width * 0.35, box.y + box.height / 2, { steps: 5 });
      await settled(page);
      const during = await iso(page);
      await page.mouse.up();
      assert.notEqual(during, before);
      const words = await slider.evaluate((element) => element.getAttribute("aria-valuetext"));
      assert.ok(words.startsWith(during.slice(0, 10)), words + " against " + during);
      await page.close();
    });

    test("a refused time is said and changes nothing; a good one clears the message", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      const numbers = () => page.$eval('[data-quantity="phase_angle_deg"]', (cell) => cell.dataset.value);
      const before = await numbers();
      for (const bad of ["2031-02-32T00:00:00Z", "yesterday", "1650-01-01T00:00:00Z", "2031-03-20T05:30:00"]) {
        await typeTime(page, bad);
        assert.notEqual(await textOf(page, '[data-say="error"]'), "", bad);
        assert.equal(await iso(page), bad, "the typed text is kept");
        assert.equal(await numbers(), before);
      }
      await typeTime(page, "2031-07-01T00:00:00Z");
      assert.equal(await textOf(page, '[data-say="error"]'), "");
      assert.notEqual(await numbers(), before);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("play moves the time and pause stops it", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const start = await iso(page);
      await page.click('[data-act="play"]');
      await page.waitForFunction((s) => document.querySelector('[data-input="time"]').value !== s, {}, start);
      await page.click('[data-act="play"]');
      await settled(page);
      const stopped = await iso(page);
      assert.ok(hours(stopped, start) > 0);
      await rested(page);
      assert.equal(await iso(page), stopped);
      await page.close();
    });

    test("what a screen reader hears waits until scrubbing rests", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      const spoken = () => textOf(page, '[data-show="spoken"]');
      const before = await spoken();
      await page.focus('[data-control="season"]');
      for (let i = 0; i < 5; i += 1) {
        await page.keyboard.press("PageUp");
      }
      await settled(page);
      assert.equal(await spoken(), before);
      await rested(page);
      const sentence = await textOf(page, '[data-say="sentence"]');
      assert.ok((await spoken()).includes(sentence));
      await page.close();
    });
  });
