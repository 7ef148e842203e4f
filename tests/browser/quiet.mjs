/* Is the page silent: no console message, no request, nothing its policy has to stop? */
import assert from "node:assert/strict";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { describe, test } from "node:test";
import { pathToFileURL } from "node:url";
import { PAGE_ADDRESS, PAGE_FILE, ROOT, open, rested } from "./browsers.mjs";

/** Requests that go beyond the page itself. */
const strangers = (requests, address) => requests.filter((url) => url.split("#")[0] !== address && !url.startsWith("blob:") && !url.startsWith("data:"));

export default (context) =>
  describe("silence", () => {
    for (const origin of ["file", "loopback"]) {
      test("the page opened from " + origin + " says nothing and asks for nothing", async () => {
        const address = origin === "file" ? PAGE_ADDRESS : context.server.address;
        const { page, noise, requests } = await open(context.browser, address);
        await rested(page);
        assert.deepEqual(noise, []);
        assert.deepEqual(strangers(requests, address), []);
        await page.close();
      });
    }

    test("the unpacked page runs over loopback", async () => {
      const { page, noise } = await open(context.browser, context.server.address + "unpacked/");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("planted noise and a planted request are noticed, and the policy stops the request", async () => {
      const { page, noise, requests } = await open(context.browser, context.server.address);
      const blocked = await page.evaluate(async (address) => {
        const seen = [];
        document.addEventListener("securitypolicyviolation", (event) => seen.push(event.effectiveDirective));
        console.error("planted");
        let fetched = true;
        try {
          await fetch(address + "unpacked/page.css");
        } catch (refused) {
          fetched = false;
        }
        await new Promise((done) => setTimeout(done, 200));
        return { seen, fetched };
      }, context.server.address);
      assert.ok(noise.some((line) => line.includes("planted")));
      assert.equal(blocked.fetched, false);
      assert.ok(blocked.seen.some((directive) => directive.startsWith("connect-src")), JSON.stringify(blocked));
      assert.deepEqual(strangers(["http://example.org/x"], context.server.address), ["http://example.org/x"]);
      assert.ok(requests.length > 0);
      await page.close();
    });

    test("a local page without a policy cannot read the file beside it, as for people", async () => {
      // The driver switches this protection off in Firefox; the tests switch it on again, or they would prove too much.
      const folder = mkdtempSync(path.join(tmpdir(), "tailvane-"));
      writeFileSync(path.join(folder, "beside.txt"), "beside");
      writeFileSync(path.join(folder, "probe.html"), "<!DOCTYPE html><title>probe</title>");
      const { page } = await open(context.browser, pathToFileURL(path.join(folder, "probe.html")).href, { waitReady: false });
      const read = await page.evaluate(() => fetch("beside.txt").then(() => true, () => false));
      assert.equal(read, false);
      await page.close();
      rmSync(folder, { recursive: true });
    });

    test("the file names no address to load from, and is within its size", async () => {
      const html = readFileSync(PAGE_FILE, "utf8");
      assert.match(html, /default-src 'none'/);
      // 500 kB is the bar of the page with everything.
      assert.ok(html.length <= 500_000, "the page has " + html.length + " bytes; the bar is 500 kB");
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const parts = await page.evaluate(() =>
        ["body.html", "styles.css", "scripts.js"].map((name) => new TextDecoder().decode(tailvanePart(name)))
      );
      for (const text of [html.replace(/<script type="application[^>]*>[^<]*/g, ""), ...parts]) {
        assert.ok(text.length > 500);
        assert.deepEqual(text.match(/(?:src|href|action)\s*=\s*["'](?!data:|#)[^"']*["']/g) || [], []);
      }
      const fields = (line) => line.split("\t").map((field, at) => (at > 0 && at < 4 ? Number(field) : field));
      const table = readFileSync(path.join(ROOT, "src/body/site_codes.txt"), "utf8");
      const rows = table.split("\n").filter((line) => line && !line.startsWith("#"));
      const carried = await page.evaluate(() => Tailvane.core.sites());
      assert.ok(rows.length > 2000);
      assert.deepEqual(carried.split("\n").map(fields), rows.map(fields), "the page carries other sites than the table");
      await page.close();
    });
  });
