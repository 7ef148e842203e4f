/* Can everyone use the page: checked rules, keyboard, text twins, reduced motion? */
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, open, paste, rested, settled, textOf } from "./browsers.mjs";

const AXE = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");

/** Violations as "rule: selector". The page's policy stops script elements, so the checker is evaluated. */
async function violations(page) {
  await page.evaluate(AXE);
  const found = await page.evaluate(async () => {
    const result = await axe.run(document, { resultTypes: ["violations"] });
    return result.violations.flatMap((rule) => rule.nodes.map((node) => rule.id + ": " + node.target.join(" ") + " " + (node.failureSummary || "")));
  });
  return found;
}

export default (context) =>
  describe("access", () => {
    for (const theme of ["dark", "red", "paper"]) {
      test("the checker finds nothing in the " + theme + " theme, benches and an error open", async () => {
        const { page } = await open(context.browser, PAGE_ADDRESS);
        await page.select('[data-control="theme"]', theme);
        await page.$$eval("details", (all) => all.forEach((details) => (details.open = true)));
        await page.click(".quantity");
        await paste(page, "no elements");
        // Every part that comes and goes: walk, notice, refused copy, explanation.
        await page.$eval('[data-act="walk"]', (button) => button.click());
        await page.evaluate(() => {
          Tailvane.notice("Something to know.", ["Do it", () => {}]);
          document.querySelector('[data-box="copy"]').hidden = false;
          document.querySelector('[data-act="explain"]').click();
        });
        await page.hover('[data-act="undo"]');
        await paste(page, "no elements");
        await settled(page);
        assert.deepEqual(await violations(page), []);
        await page.close();
      });
    }

    test("the checker finds nothing in a frame of another page", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS + "#embed=paper");
      await settled(page);
      assert.deepEqual(await violations(page), []);
      await page.close();
    });

    test("a planted fault is found", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.evaluate(() => document.querySelector("main").append(document.createElement("img")));
      assert.ok((await violations(page)).some((line) => line.startsWith("image-alt")));
      await page.close();
    });

    test("every drawing has a name and a text twin that says something", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      // What lies behind a closed bench is neither drawn nor worded.
      await page.$$eval("details", (all) => all.forEach((details) => (details.open = true)));
      await rested(page);
      const twins = await page.$$eval("[data-view]", (views) =>
        views.map((view) => ({
          role: view.getAttribute("role"),
          label: view.getAttribute("aria-label"),
          words: view.getAttribute("aria-describedby").split(" ").map((id) => document.getElementById(id).textContent).join(" "),
        }))
      );
      assert.ok(twins.length >= 1);
      for (const twin of twins) {
        assert.equal(twin.role, "img");
        assert.ok(twin.label.length > 5);
        assert.ok(twin.words.length > 80, twin.words);
      }
      await page.close();
    });

    test("every control is reached with Tab and shows its focus", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.$$eval("details", (all) => all.forEach((details) => (details.open = true)));
      const reached = new Set();
      let unseen = "";
      for (let i = 0; i < 320; i += 1) {
        await page.keyboard.press("Tab");
        const at = await page.evaluate(() => {
          const element = document.activeElement;
          if (!element || element === document.body) {
            return null;
          }
          const hook = element.dataset.act || element.dataset.control || element.dataset.input || element.dataset.view || element.dataset.element || "";
          return { hook, outline: getComputedStyle(element).outlineStyle, name: element.outerHTML.slice(0, 80) };
        });
        if (at === null) {
          if (reached.size > 10) {
            break;
          }
          continue;
        }
        reached.add(at.hook);
        if (at.outline === "none") {
          unseen = at.name;
        }
      }
      assert.equal(unseen, "");
      for (const hook of ["play", "time", "theme", "sky", "season", "elements", "read", "keep", "copy-table", "save-plan", "eccentricity", "undo", "explain", "walk", "copy-figure"]) {
        assert.ok(reached.has(hook), hook + " was not reached; reached: " + [...reached].join(" "));
      }
      await page.close();
    });

    test("the sky plane zooms, pans and resets by keys, and tells what lies under the pointer", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      const canvas = await page.$('[data-view="sky"]');
      const picture = async () => {
        await rested(page);
        return canvas.evaluate((element) => element.toDataURL());
      };
      const start = await picture();
      await canvas.focus();
      await page.keyboard.press("+");
      await settled(page);
      const zoomed = await picture();
      assert.ok(zoomed !== start, "plus changes nothing");
      await page.keyboard.press("ArrowLeft");
      await settled(page);
      assert.ok((await picture()) !== zoomed, "an arrow changes nothing");
      await page.keyboard.press("0");
      await settled(page);
      assert.ok((await picture()) === start, "0 does not bring the first picture back");
      const box = await canvas.boundingBox();
      await page.mouse.move(box.x + box.width * 0.4, box.y + box.height * 0.4);
      await settled(page);
      assert.match(await textOf(page, '[data-show="hover"]'), /position angle \d+/);
      await page.mouse.wheel({ deltaY: -240 });
      await settled(page);
      assert.ok((await picture()) !== start, "the wheel changes nothing");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("numbers explain themselves when asked", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const missing = await page.$$eval("[data-list=numbers] .quantity", (buttons) =>
        buttons.filter((button) => {
          button.click();
          const more = button.closest("tr").nextElementSibling;
          return more.hidden || more.textContent.length < 30 || button.getAttribute("aria-expanded") !== "true";
        }).length
      );
      assert.equal(missing, 0);
      await page.close();
    });
  });
