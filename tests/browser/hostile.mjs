/* Do a thousand hostile names, plans, fragments and pastes leave the page whole, with a clear word each? */
import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { deflateRawSync } from "node:zlib";
import { PAGE_ADDRESS, open, rested } from "./browsers.mjs";
import { plans } from "./numbers.mjs";

/** The same chances in every run (xorshift, 32 bits). */
function chances(seed) {
  let state = seed;
  const next = () => {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    return (state >>> 0) / 4294967296;
  };
  return { below: (most) => Math.floor(next() * most), of: (list) => list[Math.floor(next() * list.length)] };
}

const PIECES = [
  "<img src=x onerror=planted()>", "<script>planted()</script>", "</script><script>planted()</script>", "</title><svg onload=planted()>", "\"><iframe srcdoc='<script>parent.planted()</script>'>",
  "javascript:planted()", "<a href=javascript:planted()>x</a>", "' onfocus=planted() autofocus x='", "</style><style>*{display:none}", "]]><x>", "<!--", "-->", "&lt;script&gt;", "${planted()}", "{{planted()}}",
  "=HYPERLINK(\"http://e.example\")", "+1", "@SUM(1)", "\u202e\u2066", "\u200f\u061c", "\u0000", "\u001b[2J", "\ud800", "\udfff\ud800", "\ufffe\uffff", "\u2028", "\u0301".repeat(20), "A".repeat(180), "\u{1f4a5}", "%00%0a", "\\", "\"", "'", "`", "|", "||", "\n", "\r\n", "\t", "[[x]]", "{|", "__proto__", "constructor", "\ufeff",
];

const NUMBERS = ["1e999", "-1e999", "NaN", "Infinity", "0", "-0", "1e308", "5e-324", "9007199254740993", "1".repeat(400), "0x10", "1e", "\"1\"", "null", "true", "[]", "{}", "[[[]]]"];

function hostileName(chance) {
  let name = "";
  for (let left = 1 + chance.below(3); left > 0; left -= 1) {
    name += chance.of(PIECES) + chance.of(["", " ", "x"]);
  }
  return name;
}

/** A plan with a name, a number, a key or its text spoiled; many of them are still plans. */
function hostilePlan(chance) {
  const plan = JSON.parse(chance.of(plans()).text);
  plan.comet.name = hostileName(chance);
  if (plan.observer) {
    plan.observer.name = hostileName(chance);
  }
  plan.comets = [{ ...plan.comet, name: hostileName(chance) }];
  let text = JSON.stringify(plan);
  const spoil = chance.below(6);
  if (spoil === 1) {
    const numbers = [...text.matchAll(/:(-?[\d.]+(?:e-?\d+)?)/g)];
    const at = chance.of(numbers);
    text = text.slice(0, at.index + 1) + chance.of(NUMBERS) + text.slice(at.index + at[0].length);
  } else if (spoil === 2) {
    text = text.replace("{", "{" + JSON.stringify(hostileName(chance)) + ":1,");
  } else if (spoil === 3) {
    text = text.slice(0, chance.below(text.length));
  } else if (spoil === 4) {
    const deep = 100 + chance.below(3000);
    text = text.replace('"comets":[', '"comets":' + "[".repeat(deep));
  }
  return text;
}

const percent = (text) => encodeURIComponent(text.replace(/[\ud800-\udfff]/g, "?"));

function hostileFragment(chance) {
  const text = hostilePlan(chance);
  const packed = "~1." + deflateRawSync(Buffer.from(text)).toString("base64url");
  const cut = (whole) => whole.slice(0, chance.below(whole.length));
  return "#plan=" + chance.of([() => percent(text), () => packed, () => cut(packed), () => cut(percent(text)), () => text, () => hostileName(chance), () => "~1." + hostileName(chance), () => "~" + chance.below(99) + "." + packed])();
}

/** What a thousand inputs did, as faults; run in the page. */
async function feed(inputs) {
  const faults = [];
  window.planted = () => faults.push("a script ran");
  const errorBox = document.querySelector('[data-say="error"]');
  const frame = () => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)));
  const shape = () => ["script", "style", "iframe", "img", "svg", "a", "link", "form", "object", "embed"].map((tag) => document.querySelectorAll(tag).length).join();
  const started = shape();
  let taken = 0;
  for (const [kind, text] of inputs) {
    const before = Tailvane.desk.ask((desk) => desk.plan_json());
    Tailvane.say.clearError();
    if (kind === "fragment") {
      try {
        const plan = await Tailvane.link.read(text);
        if (plan !== null) {
          Tailvane.desk.change((desk) => desk.set_plan(plan));
        }
      } catch (refusal) {
        if (!refusal.refused) {
          faults.push("a failure instead of a refusal: " + refusal);
        }
        Tailvane.say.error(refusal.message);
      }
    } else if (kind === "plan") {
      Tailvane.desk.change((desk) => desk.set_plan(text));
    } else {
      Tailvane.desk.change((desk) => desk.read_text(text, 0));
    }
    const said = errorBox.textContent;
    const after = Tailvane.desk.ask((desk) => desk.plan_json());
    if (/anew|panicked|undefined|\[object/.test(said)) {
      faults.push(kind + ": " + said.slice(0, 200) + " for " + text.slice(0, 80));
    }
    if (said.length > 1500) {
      faults.push(kind + ": " + said.length + " letters of error");
    }
    if (said !== "" && after !== before) {
      faults.push(kind + ": refused and yet changed");
    }
    if (said === "" && after !== before) {
      taken += 1;
      // Everything that shows or carries the name.
      if (taken % 8 === 0) {
        await frame();
        const svg = new DOMParser().parseFromString(Tailvane.desk.ask((desk) => desk.svg_of("orbit", "dark", 400, 400)), "image/svg+xml");
        if (svg.querySelector("parsererror") || svg.querySelector("script, foreignObject, style, a")) {
          faults.push("SVG: " + text.slice(0, 80));
        }
        const table = new DOMParser().parseFromString(Tailvane.desk.ask((desk) => desk.table("html")), "text/html");
        if ([...table.body.querySelectorAll("*")].some((element) => !/^(TABLE|CAPTION|TBODY|TR|TD|TH)$/.test(element.tagName) || element.attributes.length)) {
          faults.push("table: " + text.slice(0, 80));
        }
        if (/(^|,)"?[=+@-][^0-9.]/m.test(Tailvane.desk.ask((desk) => desk.csv(0, 0, 0)))) {
          faults.push("CSV: " + text.slice(0, 80));
        }
        if (shape() !== started) {
          faults.push("elements: " + shape() + " after " + started + " for " + text.slice(0, 120));
        }
      }
    }
  }
  await frame();
  return { faults, taken };
}

export default (context) =>
  describe("hostile", () => {
    test("a thousand hostile inputs run no script, make no markup, lose nothing, and are each answered", async () => {
      const chance = chances(20310720);
      const inputs = [];
      for (let count = 0; count < 1000; count += 1) {
        const kind = ["plan", "plan", "fragment", "paste"][count % 4];
        const text = { plan: () => hostilePlan(chance), fragment: () => hostileFragment(chance), paste: () => chance.of([() => hostilePlan(chance), () => "name = " + hostileName(chance) + "\nT = 2031-04-02.5 TT\nq = 0.83\ne = 1.0\ni = 58.2\nnode = 11.5\nperi = 203.25", () => hostileName(chance)])() }[kind]();
        inputs.push([kind, text]);
      }
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      const dialogs = [];
      page.on("dialog", (dialog) => {
        dialogs.push(dialog.message());
        dialog.dismiss();
      });
      // A small sky without dust: what is drawn there is not the question.
      await page.setViewport({ width: 400, height: 500 });
      await page.evaluate(() => document.querySelectorAll("[data-layer]:checked").forEach((box) => box.click()));
      const faults = [];
      let taken = 0;
      for (let from = 0; from < inputs.length; from += 100) {
        const part = await page.evaluate("(" + feed + ")(" + JSON.stringify(inputs.slice(from, from + 100)) + ")");
        faults.push(...part.faults);
        taken += part.taken;
      }
      assert.deepEqual(faults.slice(0, 10), []);
      assert.ok(taken > 100, "enough of them are plans to test what shows names: " + taken);
      assert.deepEqual(dialogs, []);
      assert.deepEqual(noise, []);
      // The last plan survives a reload, whatever its name.
      const name = await page.$eval('[data-show="comet"]', (element) => element.textContent);
      await rested(page);
      await page.reload();
      await page.waitForFunction(() => document.documentElement.dataset.ready === "yes");
      await rested(page);
      assert.equal(await page.$eval('[data-show="comet"]', (element) => element.textContent), name);
      await page.evaluate(() => localStorage.clear());
      await page.close();
    });

    test("planted markup and a planted script are found", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const { faults } = await page.evaluate("(" + feed + ")(" + JSON.stringify([]) + ")");
      assert.deepEqual(faults, []);
      const plan = JSON.parse(plans()[3].text);
      const named = [...Array(9).keys()].map((number) => ["plan", JSON.stringify({ ...plan, comet: { ...plan.comet, name: number + "<img src=x>" } })]);
      const spoiled = "Tailvane.write = (element, text) => { element.innerHTML = text; };";
      const found = await page.evaluate(spoiled + "(" + feed + ")(" + JSON.stringify(named) + ")");
      assert.ok(found.faults.some((fault) => fault.startsWith("elements")), found.faults.join("|"));
      await page.close();
    });
  });
