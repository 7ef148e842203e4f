/*
 * Does the page keep its promises in real browsers?
 *
 * Every part below runs in Chromium and Firefox. Checks that assert an absence have a planted fault beside them that they must find.
 */
import { after, before, describe } from "node:test";
import { existsSync } from "node:fs";
import { BROWSERS, PAGE_FILE, serve } from "./browsers.mjs";
import access from "./access.mjs";
import camera from "./camera.mjs";
import embed from "./embed.mjs";
import gallery from "./gallery.mjs";
import hostile from "./hostile.mjs";
import input from "./input.mjs";
import keep from "./keep.mjs";
import layout from "./layout.mjs";
import night from "./night.mjs";
import numbers from "./numbers.mjs";
import tails from "./tails.mjs";
import quiet from "./quiet.mjs";
import season from "./season.mjs";
import share from "./share.mjs";
import time from "./time.mjs";

if (!existsSync(PAGE_FILE)) {
  throw new Error("the page is not built; run cargo page");
}

const wanted = (process.env.TAILVANE_BROWSERS || "chromium,firefox").split(",");

// The browsers side by side, since most of a test is waiting; within a browser one test at a time.
describe("the page", { concurrency: wanted.length }, () => {
  for (const name of wanted) {
    describe(name, { concurrency: 1 }, () => {
      const context = { name, browser: null, server: null };
      before(async () => {
        context.server = await serve();
        context.browser = await BROWSERS[name]();
      });
      after(async () => {
        if (context.browser) {
          await context.browser.close();
        }
        if (context.server) {
          context.server.stop();
        }
      });
      for (const part of [quiet, numbers, tails, night, camera, time, season, input, access, layout, keep, share, embed, hostile, gallery]) {
        part(context);
      }
    });
  }
});
