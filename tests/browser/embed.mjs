/* Does the page live in frames of other pages: sandboxed, without storage, several at once, under a strict policy? */
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createServer } from "node:http";
import { describe, test } from "node:test";
import { PAGE_FILE, rested, settled } from "./browsers.mjs";
import { addressOf, plans } from "./numbers.mjs";

/** Serves pages by path on loopback, with headers. */
function host(pages, headers = {}) {
  const server = createServer((request, answer) => {
    const body = pages[request.url.split("?")[0]];
    answer.writeHead(body === undefined ? 404 : 200, { "Content-Type": "text/html; charset=utf-8", ...headers });
    answer.end(body);
  });
  return new Promise((done) => server.listen(0, "127.0.0.1", () => done({ address: "http://127.0.0.1:" + server.address().port + "/", stop: () => server.close() })));
}

const html = (text) => text.replace(/[&<>"]/g, (c) => "&#" + c.charCodeAt(0) + ";");

/** A host that follows the frames' heights and notes every message. */
const hostPage = (frames, attributes = "") =>
  "<!DOCTYPE html><title>Host</title><link rel='icon' href='data:,'><body style='margin:0'>" + frames + "<script " + attributes + `>
    window.heard = [];
    addEventListener("message", (event) => {
      const frame = [...document.querySelectorAll("iframe")].find((one) => one.contentWindow === event.source);
      window.heard.push([frame ? frame.id : "", event.data]);
      if (frame && event.data.tailvane === "height") frame.height = Math.min(2000, Math.max(200, event.data.height));
    });
  </script>`;

const frameOf = (id, src, sandbox, more = "") =>
  '<iframe id="' + id + '" title="Sky" width="700" height="300" ' + (sandbox === null ? "" : 'sandbox="' + sandbox + '" ') + more + ' src="' + html(src) + '"></iframe>';

const hash = (number) => addressOf("", plans()[number].text).replace("#", "#embed&");

/** The frame with this id, once its page is ready. */
async function inside(page, id) {
  const handle = await page.waitForSelector("#" + id);
  const frame = await handle.contentFrame();
  await frame.waitForFunction(() => document.documentElement.dataset.ready === "yes", { timeout: 30000 });
  return frame;
}

const words = (frame, hook) => frame.$eval(hook, (element) => element.textContent);

export default (context) =>
  describe("embed", () => {
    const noisy = async (address) => {
      const page = await context.browser.newPage();
      const noise = [];
      page.on("console", (message) => noise.push(message.text()));
      page.on("pageerror", (failure) => noise.push(String(failure.message || failure)));
      await page.goto(address);
      return { page, noise };
    };
    const served = () => host({ "/tailvane.html": readFileSync(PAGE_FILE, "utf8") });

    test("it runs under every sandbox of the recommended kinds, keeps nothing, tells its height, and works by keys", async () => {
      const child = await served();
      const src = child.address + "tailvane.html" + hash(4);
      const kinds = { plain: null, scripts: "allow-scripts", downloads: "allow-scripts allow-downloads", same: "allow-scripts allow-same-origin" };
      const outer = await host({ "/": hostPage(Object.entries(kinds).map(([id, kind]) => frameOf(id, src, kind)).join("<br>")) });
      const { page, noise } = await noisy(outer.address);
      for (const [id, kind] of Object.entries(kinds)) {
        await page.$eval("#" + id, (frame) => frame.scrollIntoView());
        const frame = await inside(page, id);
        assert.equal(await words(frame, '[data-show="comet"]'), JSON.parse(plans()[4].text).comet.name, id);
        assert.ok((await words(frame, '[data-say="sentence"]')).length > 60, id);
        assert.equal(await frame.$eval(".benches", (benches) => getComputedStyle(benches).display), "none");
        const storage = await frame.evaluate(() => {
          try {
            return String(localStorage.length);
          } catch (refused) {
            return refused.name;
          }
        });
        assert.equal(storage === "SecurityError", kind !== null && !kind.includes("same"), id + " " + storage);
        const before = await frame.$eval('[data-input="time"]', (field) => field.value);
        await frame.focus('[data-control="season"]');
        await page.keyboard.press("ArrowRight");
        await frame.waitForFunction((was) => document.querySelector('[data-input="time"]').value !== was, {}, before);
        const [height, content] = [await page.$eval("#" + id, (element) => element.clientHeight), await frame.evaluate(() => document.documentElement.scrollHeight)];
        assert.ok(Math.abs(height - content) <= 2, id + ": a frame of " + height + " for " + content);
      }
      const heard = await page.evaluate(() => window.heard.map(([, data]) => Object.keys(data).sort().join()));
      assert.deepEqual([...new Set(heard)].sort(), ["height,tailvane", "tailvane"]);
      assert.deepEqual(noise, []);
      await page.close();
      [child, outer].forEach((server) => server.stop());
    });

    test("a host with a strict policy shows it", async () => {
      const child = await served();
      const policy = "default-src 'none'; script-src 'nonce-abc'; img-src data:; style-src 'unsafe-inline'; frame-src " + child.address.slice(0, -1);
      const outer = await host({ "/": hostPage(frameOf("one", child.address + "tailvane.html" + hash(5), "allow-scripts allow-downloads"), 'nonce="abc"') }, { "Content-Security-Policy": policy });
      const { page, noise } = await noisy(outer.address);
      const frame = await inside(page, "one");
      assert.equal(await words(frame, '[data-show="comet"]'), JSON.parse(plans()[5].text).comet.name);
      assert.deepEqual(noise, []);
      await page.close();
      [child, outer].forEach((server) => server.stop());
    });

    test("a frame made from text takes its plan by message, and ignores or refuses everything else", async () => {
      const text = readFileSync(PAGE_FILE, "utf8");
      const outer = await host({ "/": hostPage('<iframe id="one" title="Sky" width="700" height="500" sandbox="allow-scripts" srcdoc="' + html(text) + '"></iframe>') });
      const { page, noise } = await noisy(outer.address);
      const frame = await inside(page, "one");
      assert.equal(await frame.evaluate(() => document.documentElement.dataset.embed), "yes");
      const plan = plans()[6].text;
      const name = JSON.parse(plan).comet.name;
      const send = (data) => page.$eval("#one", (element, message) => element.contentWindow.postMessage(message, "*"), data);
      await send({ tailvane: "plan", plan });
      await frame.waitForFunction((wanted) => document.querySelector('[data-show="comet"]').textContent === wanted, {}, name);
      const rubbish = [null, 5, "plan", [], {}, { tailvane: "plan" }, { tailvane: "plan", plan: 5 }, { tailvane: "plan", plan: { comet: 1 } }, { tailvane: "eval", plan }, { plan }, { tailvane: { plan } }];
      for (const message of rubbish) {
        await send(message);
      }
      await rested(frame);
      assert.equal(await words(frame, '[data-say="error"]'), "");
      for (const [bad, says] of [["{", /JSON/], ["<script>", /JSON/], [plan.replace('"tailvane_plan": 1', '"tailvane_plan": 9'), /version/], [" ".repeat(2000000), /2000 kB/]]) {
        await send({ tailvane: "plan", plan: bad });
        await frame.waitForFunction(() => document.querySelector('[data-say="error"]').textContent !== "");
        assert.match(await words(frame, '[data-say="error"]'), says);
        assert.equal(await words(frame, '[data-show="comet"]'), name);
        await frame.evaluate(() => Tailvane.say.clearError());
      }
      // The whole page takes no plan from anyone.
      assert.deepEqual(noise, []);
      await page.close();
      outer.stop();
    });

    test("of several on one page only those in sight are drawn, and none can be told a plan by a stranger", async () => {
      const child = await served();
      const src = (number) => child.address + "tailvane.html" + hash(number);
      const frames = [4, 5, 6].map((number) => frameOf("f" + number, src(number), "allow-scripts")).join('<div style="height:3000px"></div>');
      const outer = await host({ "/": hostPage(frames.replaceAll('loading="lazy"', "")) });
      const { page, noise } = await noisy(outer.address);
      const first = await inside(page, "f4");
      const last = await inside(page, "f6");
      const drawn = (frame) =>
        frame.evaluate(async () => {
          let frames = 0;
          Tailvane.desk.onFrame(() => (frames += 1));
          for (let step = 0; step < 5; step += 1) {
            Tailvane.desk.change((desk) => desk.scrub(desk.reading().tdb_days + 0.5));
            await new Promise((done) => setTimeout(done, 60));
          }
          return frames;
        });
      assert.ok((await drawn(first)) > 0, "what is in sight is drawn");
      assert.equal(await drawn(last), 0, "what is out of sight is not");
      await page.$eval("#f6", (frame) => frame.scrollIntoView());
      await last.waitForFunction(() => document.querySelector('[data-view="sky"]').dataset.picture === "fine", { timeout: 10000 });
      await first.evaluate((plan) => window.parent.frames[2].postMessage({ tailvane: "plan", plan }, "*"), plans()[7].text);
      await settled(last);
      assert.equal(await words(last, '[data-show="comet"]'), JSON.parse(plans()[6].text).comet.name);
      assert.deepEqual(noise, []);
      await page.close();
      [child, outer].forEach((server) => server.stop());
    });

    test("the whole page takes no plan by message, and a link to it is in every frame", async () => {
      const child = await served();
      const outer = await host({ "/": hostPage(frameOf("whole", child.address + "tailvane.html", null) + frameOf("one", child.address + "tailvane.html" + hash(4), "allow-scripts")) });
      const { page } = await noisy(outer.address);
      const whole = await inside(page, "whole");
      const before = await words(whole, '[data-show="comet"]');
      await page.$eval("#whole", (frame, plan) => frame.contentWindow.postMessage({ tailvane: "plan", plan }, "*"), plans()[6].text);
      await settled(whole);
      assert.equal(await words(whole, '[data-show="comet"]'), before);
      await page.$eval("#one", (frame) => frame.scrollIntoView());
      const one = await inside(page, "one");
      await one.waitForFunction(() => document.querySelector('[data-show="whole"]').href.includes("#plan="), { timeout: 10000 });
      await one.$eval('[data-show="whole"]', (link) => link.click());
      // This sandbox lets no window be opened: the address is copied, or shown where that is refused too.
      await one.waitForFunction(() => /lets no window/.test(document.querySelector('[data-list="notices"]').textContent));
      const [said, shown] = await Promise.all([words(one, '[data-list="notices"]'), one.$eval('[data-show="copy"]', (box) => box.value)]);
      assert.ok(/Copied/.test(said) || shown.includes("#plan="), said);
      await page.close();
      [child, outer].forEach((server) => server.stop());
    });
  });
