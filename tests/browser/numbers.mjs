/* Does the page show the command line's numbers, to the last digit? */
import assert from "node:assert/strict";
import { readFileSync, readdirSync } from "node:fs";
import path from "node:path";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, ROOT, commandLineRows, numbersOf, open, planOf, settled, typeTime } from "./browsers.mjs";

/** Quantities that differ, as "key: page, command line". */
function differences(shown, row) {
  const keys = Object.keys(row).filter((key) => !["time", "caution"].includes(key));
  return keys.filter((key) => shown[key] !== row[key]).map((key) => key + ": " + shown[key] + ", " + row[key]);
}

/** Every plan of the gallery, and the invented comets of the page. */
export function plans() {
  return ["www/examples", "tests/gallery"].flatMap((folder) =>
    readdirSync(path.join(ROOT, folder))
      .filter((name) => name.endsWith(".plan.json"))
      .sort()
      .map((name) => ({ name: name.replace(".plan.json", ""), text: readFileSync(path.join(ROOT, folder, name), "utf8") }))
  );
}

export const addressOf = (base, plan) => base + "#plan=" + encodeURIComponent(JSON.stringify(JSON.parse(plan)));

export default (context) =>
  describe("numbers", () => {
    for (const { name, text } of plans()) {
      test("the numbers of " + name + " are the command line's to the last digit", async () => {
        const { page, noise } = await open(context.browser, addressOf(PAGE_ADDRESS, text));
        const shown = await numbersOf(page);
        const [row] = commandLineRows(text);
        assert.ok(Object.keys(shown).length >= 19);
        assert.deepEqual(differences(shown, row), []);
        assert.deepEqual(noise, []);
        await page.close();
      });
    }

    test("after scrubbing, the plan in the address gives the numbers on the page", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.focus('[data-control="season"]');
      for (const key of ["ArrowRight", "PageUp", "ArrowLeft"]) {
        await page.keyboard.press(key);
      }
      await settled(page);
      const shown = await numbersOf(page);
      const [row] = commandLineRows(await planOf(page));
      assert.deepEqual(differences(shown, row), []);
      await page.close();
    });

    test("a time typed in each accepted form gives the command line's numbers", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const plan = await planOf(page);
      for (const time of ["2031-03-20T05:30:00Z", "2031-03-20T05:30:00.250Z", "2031-05-04.51732 TT", "JD 2463000.5 UTC"]) {
        await typeTime(page, time);
        const [row] = commandLineRows(plan, ["--at", time]);
        assert.deepEqual(differences(await numbersOf(page), row), [], time);
      }
      await page.close();
    });

    test("a planted difference in the last digit is found", () => {
      const row = { time: "t", caution: "", phase_angle_deg: "12.345678901234567" };
      assert.equal(differences({ phase_angle_deg: "12.345678901234569" }, row).length, 1);
      assert.equal(differences({}, row).length, 1);
    });
  });
