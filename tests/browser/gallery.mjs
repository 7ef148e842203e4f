/* Do twelve nasty skies draw in every width and theme? The pictures are written for people to look at. */
import assert from "node:assert/strict";
import { mkdirSync } from "node:fs";
import path from "node:path";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, ROOT, open, settled, textOf } from "./browsers.mjs";
import { addressOf, plans } from "./numbers.mjs";

const SIZES = [[390, 844], [1280, 800], [2560, 1440]];
const THEMES = ["dark", "red", "paper"];

export default (context) =>
  describe("gallery", () => {
    const folder = path.join(ROOT, "target/gallery", context.name);
    for (const [number, { name, text }] of plans().entries()) {
      // The second browser draws each sky in one width, all widths in turn: the scene is the same, and it is slow at pictures.
      const sizes = context.name === "chromium" ? SIZES : [SIZES[number % SIZES.length]];
      test(name + " draws in " + sizes.map(([width]) => width).join(", ") + " pixels and three themes", async () => {
        mkdirSync(folder, { recursive: true });
        const { page, noise } = await open(context.browser, addressOf(PAGE_ADDRESS, text));
        for (const [width, height] of sizes) {
          await page.setViewport({ width, height });
          const seen = new Set();
          for (const theme of THEMES) {
            await page.select('[data-control="theme"]', theme);
            await settled(page);
            await settled(page);
            seen.add(await page.$eval('[data-view="sky"]', (canvas) => canvas.toDataURL()));
            await page.screenshot({ path: path.join(folder, name + "-" + width + "-" + theme + ".png") });
          }
          assert.equal(seen.size, 3, "each theme draws its own picture");
        }
        assert.equal(await textOf(page, '[data-say="error"]'), "");
        assert.ok((await textOf(page, '[data-say="sentence"]')).length > 60);
        assert.deepEqual(noise, []);
        await page.close();
      });
    }
  });
