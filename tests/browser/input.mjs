/* Does the page take elements in every notation, and refuse the rest without losing anything? */
import assert from "node:assert/strict";
import { describe, test } from "node:test";
import { PAGE_ADDRESS, commandLineRows, numbersOf, open, paste, planOf, rested, settled, textOf } from "./browsers.mjs";
import { addressOf, plans } from "./numbers.mjs";

const error = (page) => textOf(page, '[data-say="error"]');
const comet = (page) => textOf(page, '[data-show="comet"]');
const box = (page) => page.$eval('[data-input="elements"]', (element) => element.value);

const LINES = [
  "name = Invented comet Elm",
  "T = 2031-04-02.5 TT",
  "q = 0.83",
  "e = 1.0",
  "i = 58.2",
  "node = 11.5",
  "peri = 203.25",
  "epoch = 2031-04-10.0 TT",
].join("\n");

const BLOCK = ["T 2031 Mar. 4.51732 TT", "q 0.5200000          Peri.  33.4000", "e 1.0003000          Node  201.9000  2000.0", "                     Incl.  61.2000", "Epoch 2031 Feb. 20.0 TT"].join("\n");

/** What must be refused, and what the refusal must name. */
const BAD = [
  ["nothing at all", "", /./],
  ["prose", "the comet was bright last night", /line 1/],
  ["a negative q", LINES.replace("q = 0.83", "q = -0.83"), /line 3/],
  ["a negative e", LINES.replace("e = 1.0", "e = -0.1"), /line 4/],
  ["an inclination above 180", LINES.replace("58.2", "190"), /line 5/],
  ["a day 32", LINES.replace("2031-04-02.5", "2031-04-32.5"), /line 2/],
  ["no T", LINES.replace("T = 2031-04-02.5 TT\n", ""), /T|perihelion/],
  ["a number that is none", LINES.replace("0.83", "NaN"), /line 3/],
  ["binary", "\u0000\u0001\u0002PNG\u001a\u0000\ufffd\ufffd", /./],
  ["a plan of a newer version", '{"tailvane_plan": 2, "comet": {}}', /version|1/],
  ["an unknown plan key", '{"tailvane_plan": 1, "komet": {}}', /komet/],
];

/** Pastes a long text, made in the page from a piece, through a true paste event. */
const pasteLong = (page, piece, times) =>
  page.evaluate(
    (text, count) => {
      const data = new DataTransfer();
      data.setData("text/plain", text.repeat(count));
      // Chromium takes the transfer, Firefox the text.
      const init = { clipboardData: data, dataType: "text/plain", data: text.repeat(count), cancelable: true };
      document.querySelector('[data-input="elements"]').dispatchEvent(new ClipboardEvent("paste", init));
    },
    piece,
    times
  );

export default (context) =>
  describe("input", () => {
    test("name = value lines, the circular block and a plan are read when pasted", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await paste(page, LINES);
      assert.equal(await error(page), "");
      assert.equal(await comet(page), "Invented comet Elm");
      await paste(page, BLOCK);
      assert.equal(await error(page), "");
      const [row] = commandLineRows(await planOf(page));
      const shown = await numbersOf(page);
      assert.equal(shown.phase_angle_deg, row.phase_angle_deg);
      assert.equal(JSON.parse(await planOf(page)).comet.elements.perihelion_distance_au, 0.52);
      const plan = plans()[1].text;
      await paste(page, plan);
      assert.equal(await comet(page), JSON.parse(plan).comet.name);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("what cannot be read is refused with its place; text and picture stay", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await paste(page, LINES);
      const before = await numbersOf(page);
      for (const [what, text, names] of BAD) {
        await paste(page, LINES);
        await paste(page, text);
        const said = await error(page);
        assert.match(said, names, what + ": " + said);
        assert.equal(await comet(page), "Invented comet Elm", what);
        assert.deepEqual(await numbersOf(page), before, what);
        // A text box keeps everything but the zero bytes and line ends that no text box holds.
        assert.equal((await box(page)).replace(/\u0000/g, ""), text.replace(/\u0000/g, ""), what);
      }
      await paste(page, LINES.replace("58.2", "190"));
      const marked = await page.$eval('[data-input="elements"]', (element) => element.value.slice(element.selectionStart, element.selectionEnd));
      assert.equal(marked, "i = 190", "the faulty line is marked");
      await paste(page, LINES);
      assert.equal(await error(page), "");
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("ten megabytes of text are answered and lose nothing, good or bad", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      const name = await comet(page);
      await pasteLong(page, "no elements in this line of text at all ......................\n", 160000);
      await page.waitForFunction(() => !document.querySelector('[data-say="error"]').hidden, { timeout: 30000 });
      assert.match(await error(page), /line 1/);
      assert.ok((await error(page)).length < 1000);
      assert.equal(await comet(page), name);
      assert.match(await textOf(page, '[data-show="found"]'), /kept.*10[0-9]{3} kB/);
      await pasteLong(page, LINES + "\n\n", 90000);
      await page.waitForFunction((before) => document.querySelector('[data-show="comet"]').textContent !== before, { timeout: 30000 }, name);
      assert.equal(await error(page), "");
      assert.match(await textOf(page, '[data-show="found"]'), /^90000 comets were read/);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("of many comets each can be found and picked", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      const many = ["Elm", "Larch", "Yew"].map((tree) => LINES.replace("Elm", tree)).join("\n\n");
      await paste(page, many);
      await page.type('[data-input="read-search"]', "larch");
      await settled(page);
      const picks = await page.$$eval('[data-list="read"] button', (buttons) => buttons.map((button) => button.textContent));
      assert.equal(picks.length, 1);
      await page.click('[data-list="read"] button');
      await settled(page);
      assert.equal(await comet(page), "Invented comet Larch");
      await page.close();
    });

    test("a comet that is kept comes back after a reload, and can be removed", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.evaluate(() => localStorage.clear());
      await paste(page, LINES);
      await page.click('[data-act="keep"]');
      await page.goto("about:blank");
      await page.goto(PAGE_ADDRESS);
      await page.waitForFunction(() => document.documentElement.dataset.ready === "yes");
      const kept = () => page.$$eval('[data-list="comets"] .pick', (buttons) => buttons.map((button) => button.textContent));
      assert.ok((await kept()).some((text) => text.includes("Elm")));
      await page.click('[data-list="comets"] .forget');
      assert.ok(!(await kept()).some((text) => text.includes("Elm")));
      await page.close();
    });

    test("rubbish in the browser's store is not shown and does no harm", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await page.evaluate(() => localStorage.setItem("tailvane.comets", '["{}", 5, "<img src=x>"]'));
      await page.reload();
      await page.waitForFunction(() => document.documentElement.dataset.ready === "yes");
      const picks = await page.$$eval('[data-list="comets"] .pick', (buttons) => buttons.length);
      assert.equal(picks, 3);
      await page.evaluate(() => localStorage.clear());
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("typed elements are used, and a field that is no number is named", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.click('[data-box="elements"] summary');
      const q = await page.$('[data-element="perihelion_distance_au"]');
      await q.evaluate((field) => field.select());
      await q.type("0.75");
      await q.press("Enter");
      await settled(page);
      assert.equal(JSON.parse(await planOf(page)).comet.elements.perihelion_distance_au, 0.75);
      await q.evaluate((field) => field.select());
      await q.type("near");
      await q.press("Enter");
      await settled(page);
      assert.match(await error(page), /perihelion_distance_au.*near/);
      await page.close();
    });

    test("a site can be typed, and its rows appear and go", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      assert.ok("altitude_deg" in (await numbersOf(page)));
      await page.click('[data-bench="observer"] > summary');
      await page.click('[data-control="geocentre"]');
      await settled(page);
      assert.ok(!("altitude_deg" in (await numbersOf(page))));
      await page.click('[data-control="site"]');
      for (const [key, value] of [["name", "Test field"], ["longitude_deg", "-70.7"], ["latitude_deg", "-30.2"], ["height_m", "2400"]]) {
        const field = await page.$('[data-site="' + key + '"]');
        await field.evaluate((element) => element.select());
        await field.type(value);
      }
      await page.keyboard.press("Enter");
      await settled(page);
      const [row] = commandLineRows(await planOf(page));
      assert.equal((await numbersOf(page)).altitude_deg, row.altitude_deg);
      await page.close();
    });

    test("an observatory is found by its code and by its name", async () => {
      const { page, noise } = await open(context.browser, PAGE_ADDRESS);
      await page.click('[data-bench="observer"] > summary');
      for (const words of ["568", "mauna kea"]) {
        await page.$eval('[data-input="code-search"]', (field) => (field.value = ""));
        await page.type('[data-input="code-search"]', words);
        await page.waitForSelector('[data-list="codes"] button');
        const first = await page.$eval('[data-list="codes"] button', (button) => button.textContent);
        assert.match(first, /^568 .*Mauna ?kea/i);
        await page.click('[data-list="codes"] button');
        await settled(page);
        const [row] = commandLineRows(await planOf(page));
        assert.equal((await numbersOf(page)).altitude_deg, row.altitude_deg);
      }
      // 155.47 degrees west, 19.83 north: a published place of the mountain, to a tenth of a degree.
      const { observer } = JSON.parse(await planOf(page));
      assert.ok(Math.abs(((observer.longitude_deg + 360) % 360) - 204.53) < 0.1 && Math.abs(observer.latitude_deg - 19.83) < 0.1);
      assert.deepEqual(noise, []);
      await page.close();
    });

    test("the saved plan is the plan of the address, and the saved drawing is SVG without scripts or addresses", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await page.evaluate(() => {
        window.saved = [];
        URL.createObjectURL = (blob) => {
          window.saved.push(blob);
          return "#";
        };
        // Nothing is to land in anyone's download folder.
        HTMLAnchorElement.prototype.click = () => {};
      });
      await page.click('[data-bench="share"] > summary');
      await page.click('[data-act="save-plan"]');
      await page.click('[data-act="save-svg"]');
      const [plan, svg] = await page.evaluate(() => Promise.all(window.saved.map((blob) => blob.text())));
      assert.deepEqual(JSON.parse(plan), JSON.parse(await planOf(page)));
      assert.match(svg, /^(<\?xml[^>]*>\s*)?<svg /);
      assert.doesNotMatch(svg.replaceAll("http://www.w3.org/2000/svg", ""), /<script|<style|<foreignObject|https?:/);
      await page.close();
    });

    test("a core that fails is replaced, and the page goes on from the last good plan", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      const name = await comet(page);
      await page.evaluate(() =>
        Tailvane.desk.change(() => {
          throw new WebAssembly.RuntimeError("unreachable");
        })
      );
      await settled(page);
      assert.match(await error(page), /started anew/);
      assert.equal(await comet(page), name);
      await paste(page, LINES);
      assert.equal(await comet(page), "Invented comet Elm");
      assert.equal(await error(page), "");
      await page.close();
    });

    test("a bad plan in the address is said, and the invented comet is shown", async () => {
      for (const hash of ["#plan=%7Bbroken", "#plan=%E0%A4%A", addressOf("", '{"tailvane_plan":1,"comet":{"name":"x"}}')]) {
        const { page } = await open(context.browser, PAGE_ADDRESS + hash);
        assert.notEqual(await error(page), "", hash);
        assert.match(await comet(page), /Invented comet/);
        await page.close();
      }
    });

    test("another plan put into the address is taken", async () => {
      const { page } = await open(context.browser, PAGE_ADDRESS);
      await rested(page);
      const plan = plans()[2];
      await page.evaluate((hash) => {
        location.hash = hash;
      }, addressOf("", plan.text));
      await rested(page);
      assert.equal(await comet(page), JSON.parse(plan.text).comet.name);
      await page.close();
    });
  });
