/* Does a sky travel whole: link, picture, table, figure, walk; and does each control say what it does? */
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { describe, test } from "node:test";
import { deflateRawSync } from "node:zlib";
import { BROWSERS, PAGE_ADDRESS, commandLineRows, open, parseCsv, planIn, planOf, rested, settled, textOf } from "./browsers.mjs";
import { addressOf, plans } from "./numbers.mjs";

const PURIFY = readFileSync(createRequire(import.meta.url).resolve("dompurify/dist/purify.js"), "utf8");
const error = (page) => textOf(page, '[data-say="error"]');
const done = (page) => textOf(page, '[data-show="plan-done"]');
const packed = (text) => "#plan=~1." + deflateRawSync(text).toString("base64url");

/** Keeps what would be downloaded or copied in `window.saved` and `window.copied`. */
async function catching(page) {
  await page.evaluate(() => {
    window.saved = [];
    window.copied = [];
    Tailvane.save = (name, type, content) => window.saved.push({ name, blob: new Blob([content], { type }) });
    Tailvane.copy = async (text, said, html) => {
      window.copied.push({ text, html });
      said("Copied.");
    };
    document.querySelector('[data-bench="share"]').open = true;
  });
}

const press = (page, act) => page.$eval('[data-act="' + act + '"]', (button) => button.click());

/** The last file saved: its name and its bytes. */
async function lastSaved(page) {
  await page.waitForFunction(() => window.saved.length > 0, { timeout: 20000 });
  const [name, base64] = await page.evaluate(async () => {
    const { name, blob } = window.saved.pop();
    let letters = "";
    for (const byte of new Uint8Array(await blob.arrayBuffer())) {
      letters += String.fromCharCode(byte);
    }
    return [name, btoa(letters)];
  });
  return { name, bytes: Buffer.from(base64, "base64") };
}

async function lastCopied(page) {
  await page.waitForFunction(() => window.copied.length > 0, { timeout: 20000 });
  return page.evaluate(() => window.copied.pop());
}

/** Check sum of PNG by its definition: division by the polynomial, bit by bit. */
function crc32(bytes) {
  let rest = 0xffffffff;
  for (const byte of bytes) {
    for (let bit = 0; bit < 8; bit += 1) {
      rest = ((rest ^ (byte >> bit)) & 1) === 1 ? (rest >>> 1) ^ 0xedb88320 : rest >>> 1;
    }
  }
  return (rest ^ 0xffffffff) >>> 0;
}

/** Chunks of a PNG as [kind, content]; throws where a length or a check sum is wrong. */
function chunksOf(bytes) {
  assert.equal(bytes.subarray(1, 4).toString(), "PNG");
  const found = [];
  for (let at = 8; at < bytes.length; ) {
    const length = bytes.readUInt32BE(at);
    const inside = bytes.subarray(at + 4, at + 8 + length);
    assert.equal(crc32(inside), bytes.readUInt32BE(at + 8 + length), "check sum of " + inside.subarray(0, 4));
    found.push([inside.subarray(0, 4).toString(), inside.subarray(4)]);
    at += 12 + length;
  }
  return found;
}

export default (context) =>
  describe("share", () => {
    test("a link of two comets and a camera stays under 2,000 characters, and every plan comes back from its link", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      const texts = plans().map(({ text }) => text);
      const two = JSON.parse(texts[0]);
      two.comets = [JSON.parse(texts[1]).comet, JSON.parse(texts[2]).comet];
      await page.evaluate((plan) => Tailvane.desk.change((desk) => desk.set_plan(plan)), JSON.stringify(two));
      assert.equal(await error(page), "");
      // Another bench's section does not change how a link is made.
      const camera = { name: "Invented camera", width_px: 6248, height_px: 4176, pixel_um: 3.76, focal_length_mm: 530.5, rotation_deg: 213.25, mirrored: false, offset_east_arcmin: 12.5, offset_north_arcmin: -4.25 };
      const links = await page.evaluate((all) => Promise.all(all.map((plan) => Tailvane.link.write(plan))), [...texts, JSON.stringify(two), JSON.stringify({ ...two, camera, cameras: [camera] })]);
      assert.ok("https://team.example/pages/tailvane.html#".length + links.at(-1).length < 2000, "the link has " + links.at(-1).length);
      assert.ok(links.at(-1).startsWith("plan=~1."), links.at(-1).slice(0, 20));
      [...texts, JSON.stringify(two)].forEach((text, at) => assert.deepEqual(JSON.parse(planIn("#" + links[at])), JSON.parse(text)));
      const back = await page.evaluate((all) => Promise.all(all.map((link) => Tailvane.link.read("#" + link))), links);
      back.slice(0, -1).forEach((text, at) => assert.deepEqual(JSON.parse(text), JSON.parse([...texts, JSON.stringify(two)][at])));
      assert.ok(links.every((link) => /^[A-Za-z0-9._~%=-]+$/.test(link)), "a link holds nothing that ends a link");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("packed links of another program open; broken, cut, newer, huge and exploding ones are said, and nothing is lost", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      const before = JSON.parse(await planOf(page));
      const plan = plans()[3];
      const good = packed(JSON.stringify(JSON.parse(plan.text)));
      const bad = [
        [good.slice(0, -8), /cut off|cannot be unpacked/],
        [good.slice(0, 60), /cut off|cannot be unpacked/],
        [good.slice(0, 40) + "A" + good.slice(41), /./],
        ["#plan=~1.", /./],
        ["#plan=~2.AAAA", /newer/],
        ["#plan=%E0%A4%A", /percent-encoding/],
        ["#plan=" + "x".repeat(150000), /./],
        ["#plan=" + "x".repeat(1000000), /1000 kB/],
        // 64 MB of blanks in 62 kB.
        [packed(Buffer.alloc(64e6, 32)), /1000 kB/],
        [packed(JSON.stringify(JSON.parse(plan.text))).slice(0, 20), /./],
        ["#plan=" + encodeURIComponent('{"tailvane_plan":2}'), /version/],
      ];
      for (const [fragment, says] of bad) {
        const said = await page.evaluate(async (hash) => {
          Tailvane.say.clearError();
          try {
            const text = await Tailvane.link.read(hash);
            Tailvane.desk.change((desk) => desk.set_plan(text));
          } catch (refusal) {
            Tailvane.say.error(refusal.message);
          }
          return document.querySelector('[data-say="error"]').textContent;
        }, fragment);
        assert.match(said, says, fragment.slice(0, 40));
        assert.ok(said.length < 600 && !/anew/.test(said), said);
        assert.deepEqual(JSON.parse(await page.evaluate(() => Tailvane.desk.ask((desk) => desk.plan_json()))), before);
      }
      await page.evaluate((hash) => {
        location.hash = hash;
      }, good);
      await rested(page);
      assert.equal(await textOf(page, '[data-show="comet"]'), JSON.parse(plan.text).comet.name);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a link of 300 kB opens the page with the invented comet, and says why", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS + "#plan=" + "x".repeat(300000));
      assert.match(await error(page), /300 kB.*invented comet/i);
      assert.match(await textOf(page, '[data-show="comet"]'), /Invented comet/);
      await page.close();
    });

    test("every drawing is saved as SVG that a strict cleaner leaves as it is", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      await catching(page);
      await page.evaluate(PURIFY);
      const views = await page.$$eval('[data-share="view"] option', (options) => options.map((option) => option.value));
      assert.ok(views.length >= 3);
      for (const view of views) {
        await page.select('[data-share="view"]', view);
        await press(page, "save-svg");
        const { name, bytes } = await lastSaved(page);
        assert.match(name, /^invented-comet-alder-[a-z]+\.svg$/);
        const svg = bytes.toString();
        assert.match(svg, /^<svg [^>]*width="1600" height="1200"/);
        const faults = await page.evaluate((text) => {
          const listed = (root) => [...root.querySelectorAll("*")].map((element) => element.tagName + " " + [...element.attributes].map((a) => a.name + "=" + a.value.slice(0, 200)).sort().join(" "));
          const parse = (source) => new DOMParser().parseFromString(source, "text/html").querySelector("svg").parentElement;
          const mine = listed(parse(text));
          // Roles are for reading aloud, which the cleaner's SVG list leaves out.
          const clean = listed(parse(DOMPurify.sanitize(text, { USE_PROFILES: { svg: true }, ADD_ATTR: ["role"] })));
          const planted = DOMPurify.sanitize(text.replace("</svg>", "<script>1</script><foreignObject/></svg>"), { USE_PROFILES: { svg: true } });
          const kept = new Set(clean);
          return { lost: mine.filter((line) => !kept.has(line)).slice(0, 3), count: mine.length - clean.length, planted: /script|foreignObject/i.test(planted) };
        }, svg);
        assert.deepEqual(faults, { lost: [], count: 0, planted: false }, view);
        assert.doesNotMatch(svg.replaceAll("http://www.w3.org/2000/svg", ""), /<(script|style|foreignObject)|https?:|\son\w+=|url\(|href="(?!data:image\/png)/i);
      }
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a PNG has its size, shows the sky, and carries the sentence in sound chunks", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      await catching(page);
      const sentence = await textOf(page, '[data-say="sentence"]');
      await press(page, "save-png");
      const { bytes } = await lastSaved(page);
      const chunks = chunksOf(bytes);
      assert.deepEqual([chunks[0][0], chunks.at(-1)[0]], ["IHDR", "IEND"]);
      assert.deepEqual([chunks[0][1].readUInt32BE(0), chunks[0][1].readUInt32BE(4)], [1600, 1200]);
      const texts = chunks.filter(([kind]) => kind === "iTXt").map(([, content]) => content.toString());
      assert.ok(texts.some((text) => text.startsWith("Description\0\0\0en\0\0") && text.endsWith(sentence)), texts.join("|"));
      const colours = await page.evaluate(async (base64) => {
        const blob = new Blob([Uint8Array.from(atob(base64), (c) => c.charCodeAt(0))], { type: "image/png" });
        const bitmap = await createImageBitmap(blob);
        const canvas = new OffscreenCanvas(bitmap.width, bitmap.height);
        const context = canvas.getContext("2d");
        context.drawImage(bitmap, 0, 0);
        const { data } = context.getImageData(0, 0, bitmap.width, bitmap.height);
        const seen = new Set();
        for (let at = 0; at < data.length; at += 4) {
          seen.add((data[at] << 16) | (data[at + 1] << 8) | data[at + 2]);
        }
        return seen.size;
      }, bytes.toString("base64"));
      assert.ok(colours > 200, "dust, lines and letters have many colours: " + colours);
      for (const [side, typed] of [["width", "0"], ["height", "1e9"], ["width", "wide"]]) {
        await page.$eval('[data-share="' + side + '"]', (field, value) => (field.value = value), typed);
        await press(page, "save-png");
        await settled(page);
        assert.match(await error(page), new RegExp("picture's " + side + ".*" + typed));
        await page.evaluate(() => document.querySelectorAll("#share-width, #share-height").forEach((field) => (field.value = field.defaultValue)));
      }
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a browser that scrambles pictures is noticed, and SVG is offered instead", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await catching(page);
      await page.evaluate(() => {
        const read = CanvasRenderingContext2D.prototype.getImageData;
        CanvasRenderingContext2D.prototype.getImageData = function (...where) {
          const found = read.apply(this, where);
          found.data[1] ^= 1;
          return found;
        };
      });
      await press(page, "save-png");
      await page.waitForFunction(() => document.querySelector('[data-show="plan-done"]').textContent !== "");
      assert.match(await done(page), /scrambles.*SVG/);
      assert.equal(await page.evaluate(() => window.saved.length), 0);
      await page.close();
      if (context.name === "firefox") {
        const strict = await BROWSERS.firefox({ "privacy.resistFingerprinting": true });
        const { page: shielded } = await open(strict, PAGE_ADDRESS);
        await catching(shielded);
        await press(shielded, "save-png");
        await shielded.waitForFunction(() => document.querySelector('[data-show="plan-done"]').textContent !== "");
        assert.match(await done(shielded), /scrambles.*SVG/);
        await strict.close();
      }
    });

    test("the CSV has the columns and digits of the command line", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const plan = await planOf(page);
      await catching(page);
      await page.select('[data-share="rows"]', "0 0");
      await press(page, "save-csv");
      const [header, row] = parseCsv((await lastSaved(page)).bytes.toString());
      assert.deepEqual(Object.fromEntries(header.map((key, at) => [key, row[at]])), commandLineRows(plan)[0]);
      await page.select('[data-share="rows"]', "30 1");
      await press(page, "save-csv");
      const many = parseCsv((await lastSaved(page)).bytes.toString());
      assert.equal(many.length, 62);
      const at = many[31][0];
      assert.deepEqual(Object.fromEntries(many[0].map((key, column) => [key, many[31][column]])), commandLineRows(plan, ["--at", at])[0]);
      await page.close();
    });

    test("figure, table and link come in one press in every form, and a frame's code holds the plan", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      const plan = JSON.parse(await planOf(page));
      await catching(page);
      await page.$eval('[data-share="address"]', (field) => (field.value = "https://team.example/tailvane.html"));
      const begins = { wiki: /^\[\[File:invented-comet-alder-sky\.png\|thumb\|/, markdown: /^!\[/, html: /^<figure>\n<img src="data:image\/png;base64,/, plain: /^Invented comet Alder/ };
      for (const [form, begin] of Object.entries(begins)) {
        await page.select('[data-share="form"]', form);
        await press(page, "copy-figure");
        const { text, html } = await lastCopied(page);
        assert.match(text, begin);
        assert.match(text, /Phase angle/i);
        const link = /https:\/\/team\.example\/tailvane\.html(#plan=[A-Za-z0-9._~%-]+)/.exec(text);
        assert.deepEqual(JSON.parse(planIn(link[1])), plan, form);
        assert.equal(html !== "", form === "html");
      }
      await press(page, "copy-embed");
      const code = (await lastCopied(page)).text;
      const frame = await page.evaluate((html) => {
        const found = new DOMParser().parseFromString(html, "text/html").querySelector("iframe");
        return Object.fromEntries([...found.attributes].map((a) => [a.name, a.value]));
      }, code);
      assert.equal(frame.sandbox, "allow-scripts allow-downloads");
      assert.equal(frame.allow, "clipboard-write");
      assert.equal(frame.loading, "lazy");
      assert.match(frame.title, /Invented comet Alder/);
      assert.deepEqual(JSON.parse(planIn(new URL(frame.src).hash)), plan);
      await page.$eval('[data-share="address"]', (field) => (field.value = "javascript:alert(1)"));
      await press(page, "copy-link");
      await settled(page);
      assert.match(await error(page), /address of the page.*javascript/);
      assert.equal(await page.evaluate(() => window.copied.length), 0);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a refused clipboard shows the text, selected", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.evaluate(() => {
        Object.defineProperty(navigator, "clipboard", { value: { writeText: () => Promise.reject(new Error("no")) } });
        document.querySelector('[data-bench="share"]').open = true;
      });
      await press(page, "copy-link");
      await page.waitForFunction(() => !document.querySelector('[data-box="copy"]').hidden);
      const shown = await page.evaluate(() => {
        const box = document.querySelector('[data-show="copy"]');
        return [document.activeElement === box, box.value.slice(box.selectionStart, box.selectionEnd), box.value];
      });
      assert.ok(shown[0] && shown[1] === shown[2] && shown[2].includes("#plan="));
      await press(page, "close-copy");
      assert.equal(await page.$eval('[data-box="copy"]', (box) => box.hidden), true);
      await page.close();
    });

    test("the walk leads to the sunward tail by keys alone, and gives the plan back", async () => {
      const { page, noise } = await open(context.browser, addressOf(PAGE_ADDRESS, plans()[5].text));
      const before = JSON.parse(await planOf(page));
      await page.focus('[data-act="walk"]');
      await page.keyboard.press("Enter");
      await page.waitForFunction(() => !document.querySelector('[data-box="walk"]').hidden);
      const seen = [];
      for (let step = 0; step < 7; step += 1) {
        await settled(page);
        assert.equal(await error(page), "");
        seen.push([await textOf(page, '[data-show="walk-title"]'), await textOf(page, '[data-say="sentence"]')]);
        await page.keyboard.press("ArrowRight");
      }
      assert.match(seen[0][0], /^1 of 7/);
      assert.match(seen[4][1], /edge-on/);
      assert.match(seen[5][0] + seen[5][1], /sunward.*project toward the Sun/);
      assert.match(seen[6][1], /only dust that was thrown out/);
      await page.keyboard.press("Escape");
      await rested(page);
      assert.deepEqual(JSON.parse(await planOf(page)), before);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("a team's own walk opens from its files, and a broken one is refused by its step", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const give = (files) =>
        page.evaluate(async (list) => {
          Tailvane.say.clearError();
          const input = document.querySelector('[data-file="walk"]');
          const data = new DataTransfer();
          list.forEach(([name, text]) => data.items.add(new File([text], name)));
          input.files = data.files;
          input.dispatchEvent(new Event("change"));
          await new Promise((done) => setTimeout(done, 200));
        }, files);
      const list = JSON.stringify({ tailvane_walk: 1, steps: [{ title: "<b>One</b>", text: "Words", plan: "a.plan.json" }] });
      await give([["our.walk.json", list]]);
      assert.match(await error(page), /no plan for step 1/);
      await give([["our.walk.json", list], ["a.plan.json", "{}"]]);
      assert.match(await error(page), /step 1.*tailvane_plan/);
      assert.equal(await page.$eval('[data-box="walk"]', (box) => box.hidden), true);
      await give([["our.walk.json", list], ["a.plan.json", plans()[4].text]]);
      assert.equal(await error(page), "");
      assert.equal(await textOf(page, '[data-show="walk-title"]'), "1 of 1: <b>One</b>");
      assert.equal(await textOf(page, '[data-show="comet"]'), JSON.parse(plans()[4].text).comet.name);
      await page.close();
    });

    test("every control explains itself, and with Explain on a press only explains", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await page.$$eval("details", (all) => all.forEach((details) => (details.open = true)));
      await page.evaluate(() => Tailvane.core.words());
      await rested(page);
      const silent = await page.$$eval("button, input:not([type=file]), select, textarea, summary, canvas:not([aria-hidden])", (all) =>
        all
          .filter((control) => control.checkVisibility())
          .filter((control) => {
            const ids = (control.getAttribute("aria-describedby") || "").split(" ");
            const words = control.title + ids.map((id) => (document.getElementById(id) || { textContent: "" }).textContent).join(" ");
            return words.trim().length < 20;
          })
          .map((control) => control.outerHTML.slice(0, 120))
      );
      assert.deepEqual(silent, []);
      await page.click('[data-act="explain"]');
      const hour = await textOf(page, '[data-show="decimal-day"]');
      await page.click('[data-step-hours="1"]');
      await settled(page);
      assert.match(await textOf(page, '[data-show="explain"]'), /one hour/);
      assert.equal(await textOf(page, '[data-show="decimal-day"]'), hour);
      await page.keyboard.press("Escape");
      await page.click('[data-step-hours="1"]');
      await settled(page);
      assert.notEqual(await textOf(page, '[data-show="decimal-day"]'), hour);
      assert.equal(await textOf(page, '[data-show="explain"]'), "");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("the page lists the licences of what is packed in it", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const listed = await page.$$eval('[data-list="licences"] li', (items) => items.map((item) => item.textContent));
      for (const name of ["nalgebra", "serde_json", "libm", "wasm-bindgen", "miniz_oxide"]) {
        assert.ok(listed.some((line) => line.startsWith(name + " ") && /: .*(MIT|Apache)/.test(line)), name);
      }
      assert.ok(listed.every((line) => !line.includes("/home") && !line.includes("(/")));
      await page.close();
    });
  });
