/* Is no work ever lost: reload, crash, full or refused storage, undo, two tabs? */
import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, open, paste, planOf, ready, rested, settled, textOf } from "./browsers.mjs";
import { addressOf, plans } from "./numbers.mjs";

const comet = (page) => textOf(page, '[data-show="comet"]');
const notices = (page) => textOf(page, '[data-list="notices"]');
const planNow = (page) => page.evaluate(() => JSON.parse(Tailvane.desk.ask((desk) => desk.plan_json())));
const setPlan = (page, text) => page.evaluate((plan) => Tailvane.desk.change((desk) => desk.set_plan(plan)), text);
const clear = (page) => page.evaluate(() => {
  localStorage.clear();
  sessionStorage.clear();
});

async function reload(page) {
  await page.reload();
  await ready(page);
}

export default (context) =>
  describe("keep", () => {
    test("a change survives a reload at once, with typed but unread text in boxes and fields", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await clear(page);
      await setPlan(page, plans()[4].text);
      await rested(page);
      await page.$eval('[data-box="elements"]', (details) => (details.open = true));
      await page.$eval('[data-element="eccentricity"]', (field) => field.select());
      await page.type('[data-element="eccentricity"]', "0.97 not yet");
      await page.type('[data-input="elements"]', "q = 0.5 and more to come");
      await page.focus('[data-control="season"]');
      await page.keyboard.press("ArrowRight");
      const before = await planNow(page);
      // No rest: the page goes away in the middle of it.
      await reload(page);
      await settled(page);
      assert.deepEqual(await planNow(page), before);
      const value = (selector) => page.$eval(selector, (field) => field.value);
      assert.equal(await value('[data-element="eccentricity"]'), "0.97 not yet");
      assert.equal(await value('[data-input="elements"]'), "q = 0.5 and more to come");
      await rested(page);
      assert.deepEqual(await planNow(page), before, "text that was put back is not read");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a tab that never said goodbye leaves its plan to the next visit", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await clear(page);
      await setPlan(page, plans()[5].text);
      await rested(page);
      // As after a crash: nothing runs at the end.
      await page.evaluate(() => window.stop());
      await page.close({ runBeforeUnload: false });
      const { page: next } = await open(context.browser, PAGE_ADDRESS);
      assert.match(await comet(next), /Alder/);
      const name = JSON.parse(plans()[5].text).comet.name;
      assert.match(await textOf(next, '[data-list="left"]'), new RegExp(name));
      await next.$eval('[data-list="left"] .pick', (button) => button.click());
      await settled(next);
      assert.equal(await comet(next), name);
      await clear(next);
      await next.close();
    });

    test("a tab that only looks keeps nothing", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await clear(page);
      await reload(page);
      await rested(page);
      assert.equal(await page.evaluate(() => Object.keys(localStorage).filter((key) => key.includes("slot")).length), 0);
      await page.close();
    });

    test("a plan in the address comes first, and what the tab had can be gone back to; a broken one changes nothing", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await clear(page);
      await setPlan(page, plans()[4].text);
      await rested(page);
      const before = await planNow(page);
      await page.goto("about:blank");
      await page.goto(addressOf(PAGE_ADDRESS, plans()[6].text));
      await ready(page);
      assert.equal(await comet(page), JSON.parse(plans()[6].text).comet.name);
      await rested(page);
      await page.$eval('[data-act="undo"]', (button) => button.click());
      await rested(page);
      assert.deepEqual(await planNow(page), before);
      await page.goto("about:blank");
      await page.goto(PAGE_ADDRESS + "#plan=~1.cutoff");
      await ready(page);
      assert.match(await textOf(page, '[data-say="error"]'), /cut off.*kept/);
      assert.deepEqual(await planNow(page), before);
      await clear(page);
      await page.close();
    });

    test("undo and redo go through plans by button and key, and a text field keeps its own", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      const seen = [await planNow(page)];
      for (const { text } of plans().slice(3, 6)) {
        await setPlan(page, text);
        await rested(page);
        seen.push(await planNow(page));
      }
      await setPlan(page, plans()[7].text);
      const last = await planNow(page);
      await page.focus('[data-view="sky"]');
      const stroke = async (...keys) => {
        for (const key of keys.slice(0, -1)) {
          await page.keyboard.down(key);
        }
        await page.keyboard.press(keys.at(-1));
        for (const key of keys.slice(0, -1)) {
          await page.keyboard.up(key);
        }
        await settled(page);
      };
      // The last change has not come to rest; it is not lost either.
      for (const wanted of [seen[3], seen[2], seen[1], seen[0], seen[0]]) {
        await stroke("Control", "z");
        assert.deepEqual(await planNow(page), wanted);
      }
      assert.equal(await page.$eval('[data-act="undo"]', (button) => button.getAttribute("aria-disabled")), "true");
      for (const wanted of [seen[1], seen[2], seen[3]]) {
        await stroke("Control", "Shift", "Z");
        assert.deepEqual(await planNow(page), wanted);
      }
      await page.$eval('[data-act="redo"]', (button) => button.click());
      assert.deepEqual(await planNow(page), last);
      await page.focus('[data-input="elements"]');
      await page.keyboard.type("abc");
      await stroke("Control", "z");
      assert.deepEqual(await planNow(page), last);
      await page.focus('[data-view="sky"]');
      await stroke("Control", "z");
      assert.deepEqual(await planNow(page), seen[3]);
      await setPlan(page, plans()[8].text);
      await rested(page);
      assert.equal(await page.$eval('[data-act="redo"]', (button) => button.getAttribute("aria-disabled")), "true");
      assert.deepEqual(noise, []);
      await page.close();
    });

    for (const [what, spoil] of [
      ["full", () => {
        Storage.prototype.setItem = () => {
          throw new DOMException("full", "QuotaExceededError");
        };
      }],
      ["refused", () => {
        for (const name of ["localStorage", "sessionStorage"]) {
          Object.defineProperty(window, name, { get() {
            throw new DOMException("refused", "SecurityError");
          } });
        }
      }],
    ]) {
      test("storage that is " + what + " is said once, with a file to save instead; the page goes on", async () => {
        const page = await context.browser.newPage();
        const noise = [];
        page.on("pageerror", (failure) => noise.push(failure.message));
        await page.evaluateOnNewDocument(spoil);
        await page.goto(PAGE_ADDRESS);
        await ready(page);
        assert.equal(await notices(page), "");
        for (const { text } of plans().slice(3, 6)) {
          await setPlan(page, text);
          await rested(page);
        }
        assert.equal((await notices(page)).match(/does not let the page keep/g).length, 1);
        await page.evaluate(() => {
          Tailvane.save = (name) => (window.saved = name);
          document.querySelector('[data-list="notices"] button').click();
        });
        assert.match(await page.evaluate(() => window.saved), /\.plan\.json$/);
        assert.equal(await comet(page), JSON.parse(plans()[5].text).comet.name);
        assert.deepEqual(noise, []);
        await page.close();
      });
    }

    test("two tabs in one place part, say so, and neither plan is lost", async () => {
      const { page: one } = await open(context.browser, PAGE_ADDRESS);
      await clear(one);
      await setPlan(one, plans()[4].text);
      await rested(one);
      const place = await one.evaluate(() => sessionStorage.getItem("tailvane.slot"));
      // A doubled tab begins with a copy of what its twin keeps for itself.
      const two = await context.browser.newPage();
      await two.goto(PAGE_ADDRESS);
      await ready(two);
      await two.evaluate((slot) => sessionStorage.setItem("tailvane.slot", slot), place);
      await reload(two);
      assert.equal(await comet(two), JSON.parse(plans()[4].text).comet.name);
      await setPlan(two, plans()[6].text);
      await rested(two);
      await one.bringToFront();
      await setPlan(one, plans()[7].text);
      await rested(one);
      const said = [await notices(one), await notices(two)];
      assert.ok(said.some((words) => /Another tab/.test(words)), said.join("|"));
      const kept = await one.evaluate(() => Object.keys(localStorage).filter((key) => key.includes("slot.")).map((key) => JSON.parse(JSON.parse(localStorage.getItem(key)).plan).comet.name).sort());
      const names = [6, 7].map((at) => JSON.parse(plans()[at].text).comet.name).sort();
      for (const name of names) {
        assert.ok(kept.includes(name), kept.join("|"));
      }
      const told = /Another tab/.test(said[0]) ? one : two;
      const own = await comet(told);
      await told.evaluate(() => [...document.querySelectorAll('[data-list="notices"] button')].find((button) => /Take/.test(button.textContent)).click());
      await told.bringToFront();
      await settled(told);
      assert.equal(await comet(told), names.find((name) => name !== own));
      await clear(one);
      await one.close();
      await two.close();
    });

    test("a walk does not take the place of the plan that was there", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await clear(page);
      await setPlan(page, plans()[4].text);
      await rested(page);
      const before = await planNow(page);
      await page.$eval('[data-act="walk"]', (button) => button.click());
      await rested(page);
      assert.notDeepEqual(await planNow(page), before);
      await reload(page);
      assert.deepEqual(await planNow(page), before);
      await clear(page);
      await page.close();
    });

    test("pasted text that cannot be read stays after a reload", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await clear(page);
      await paste(page, "no elements <b>here</b>");
      await new Promise((done) => setTimeout(done, 600));
      await reload(page);
      assert.equal(await page.$eval('[data-input="elements"]', (field) => field.value), "no elements <b>here</b>");
      assert.match(JSON.stringify(await planOf(page)), /Alder/);
      await clear(page);
      await page.close();
    });
  });
