/* Does the page fit: narrow, wide, very wide, enlarged? */
import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, open, paste, settled } from "./browsers.mjs";

/** Faults of the layout as sentences: sideways scrolling, boxes that overlap, text that is cut off. */
const faults = (page) =>
  page.evaluate(() => {
    const found = [];
    const root = document.documentElement;
    if (root.scrollWidth > root.clientWidth) {
      found.push("the page scrolls sideways: " + root.scrollWidth + " in " + root.clientWidth);
    }
    const boxOf = (element) => element.getBoundingClientRect();
    const shown = (element) => boxOf(element).width > 1 && boxOf(element).height > 1;
    const name = (element) => element.className || element.dataset.act || element.tagName;
    const overlap = (a, b) => Math.min(a.right, b.right) - Math.max(a.left, b.left) > 1 && Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top) > 1;
    for (const group of [".bar, .alerts, .sky, .words, .season, .benches", ".bar > *", ".when > :not(.unseen)", ".saying, .plane", ".bench", ".season-foot > *", ".tick-words"]) {
      const boxes = [...document.querySelectorAll(group)].filter(shown);
      boxes.forEach((a, at) => {
        for (const b of boxes.slice(at + 1)) {
          if (overlap(boxOf(a), boxOf(b))) {
            found.push(name(a) + " overlaps " + name(b) + " (" + a.textContent.slice(0, 20) + " / " + b.textContent.slice(0, 20) + ")");
          }
        }
      });
    }
    for (const element of document.querySelectorAll("button, select, summary, p, li, th, td, label, .tick-words, h1")) {
      // A wide table lies in a region that scrolls by itself.
      if (!shown(element) || element.closest(".unseen, .scroll")) {
        continue;
      }
      const box = boxOf(element);
      if (box.right > root.clientWidth + 1 || box.left < -1) {
        found.push(name(element) + " sticks out: " + element.textContent.slice(0, 30));
      }
      if (element.scrollWidth > element.clientWidth + 1 && getComputedStyle(element).display !== "inline" && element.tagName !== "SELECT") {
        found.push(name(element) + " is cut off: " + element.textContent.slice(0, 30));
      }
    }
    if (innerWidth >= 1000 && innerHeight >= 700 && parseFloat(getComputedStyle(root).fontSize) < 20 && root.scrollHeight > root.clientHeight) {
      found.push("the page scrolls down although it fits: " + root.scrollHeight + " in " + root.clientHeight);
    }
    const canvas = boxOf(document.querySelector("canvas"));
    if (canvas.width < 280 || canvas.height < 240) {
      found.push("the sky has only " + canvas.width + " by " + canvas.height);
    }
    return found;
  });

export default (context) =>
  describe("layout", () => {
    for (const [what, width, height] of [["a phone", 390, 844], ["a laptop", 1280, 800], ["a large screen", 2560, 1440], ["a laptop at 200 percent", 640, 400], ["a narrow window", 760, 900], ["just wide", 800, 900]]) {
      test("fits " + what + ", " + width + " by " + height, async () => {
        const { page } = await open(context.browser, PAGE_ADDRESS, { viewport: { width, height } });
        await settled(page);
        assert.deepEqual(await faults(page), []);
        await page.$$eval("details", (all) => all.forEach((details) => (details.open = true)));
        await paste(page, "no elements");
        await settled(page);
        assert.deepEqual(await faults(page), []);
        await page.close();
      });
    }

    test("text at twice its size loses nothing", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS, { viewport: { width: 1280, height: 800 } });
      await page.evaluate(() => {
        document.documentElement.style.fontSize = "200%";
      });
      await settled(page);
      await settled(page);
      assert.deepEqual(await faults(page), []);
      await page.close();
    });

    test("a planted overflow and a planted overlap are found", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.evaluate(() => {
        const wide = document.createElement("p");
        wide.textContent = "x";
        wide.style.width = "4000px";
        document.querySelector("main").append(wide);
        document.querySelector(".words").style.transform = "translateY(-80px)";
      });
      const found = await faults(page);
      assert.ok(found.some((line) => line.includes("sideways")), found.join("; "));
      assert.ok(found.some((line) => line.includes("overlaps")), found.join("; "));
      await page.close();
    });
  });
