/*
 * How long does a frame of the page take while the date is scrubbed?
 *
 * node benches/frames.mjs [WIDTH HEIGHT [RATIO]]: opens target/page/tailvane.html in Chromium (packages of tests/browser), gives the
 * sky that size in CSS pixels, scrubs a quarter of an hour with every frame, and prints the busy time of the frames, the step
 * of the date included, and of the finer picture that follows. Reported, never asserted: it depends on the machine.
 */
import { BROWSERS, PAGE_ADDRESS, open } from "../tests/browser/browsers.mjs";

const [width, height, ratio] = [1200, 800, 1].map((usual, at) => Number(process.argv[2 + at] || usual));
const browser = await BROWSERS.chromium();
const { page } = await open(browser, PAGE_ADDRESS, { viewport: { width: width + 400, height: height + 300, deviceScaleFactor: ratio } });
for (let round = 0; round < 3; round += 1) {
  const size = await page.$eval('[data-view="sky"]', (canvas) => [canvas.clientWidth, canvas.clientHeight]);
  const now = await page.evaluate(() => [innerWidth, innerHeight]);
  await page.setViewport({ width: now[0] + width - size[0], height: now[1] + height - size[1], deviceScaleFactor: ratio });
  await new Promise((done) => setTimeout(done, 300));
}

const scrub = (prepare) =>
  page.evaluate(async (setUp) => {
    setUp.split(" ").filter(Boolean).forEach((layer) => (document.querySelector('[data-layer="' + layer + '"]').checked = false));
    document.querySelector("[data-layer]").dispatchEvent(new Event("change", { bubbles: true }));
    const busy = [];
    let stepped = 0;
    const native = window.requestAnimationFrame.bind(window);
    window.requestAnimationFrame = (act) =>
      native((time) => {
        const from = performance.now();
        act(time);
        busy.push(stepped + performance.now() - from);
      });
    let now = Tailvane.desk.ask((desk) => desk.reading().tdb_days);
    const started = performance.now();
    const frames = 240;
    for (let frame = 0; frame < frames; frame += 1) {
      now += 1 / 96;
      const from = performance.now();
      Tailvane.desk.change((desk) => desk.scrub(now));
      stepped = performance.now() - from;
      await new Promise((done) => native(done));
    }
    const rate = (1000 * frames) / (performance.now() - started);
    window.requestAnimationFrame = native;
    const still = [];
    for (let round = 0; round < 12; round += 1) {
      now += 1 / 96;
      Tailvane.desk.change((desk) => desk.scrub(now));
      await new Promise((done) => native(() => native(done)));
      const from = performance.now();
      Tailvane.sky.refine();
      still.push(performance.now() - from);
    }
    const middle = (list) => list.sort((a, b) => a - b)[Math.floor(list.length / 2)];
    const late = busy.sort((a, b) => a - b)[Math.floor(busy.length * 0.95)];
    return { rate, busy: middle(busy), least: busy[0], late, still: middle(still), stillest: still[0] };
  }, prepare);

const size = await page.$eval('[data-view="sky"]', (canvas) => canvas.clientWidth + " x " + canvas.clientHeight + " CSS pixels, " + canvas.width + " x " + canvas.height + " on the device");
console.log("sky " + size);
for (const [words, off] of [["everything", ""], ["dust picture without curves and shading", "syndynes synchrones neck_line toward_sun"], ["no dust picture either", "dust"]]) {
  const { rate, busy, least, late, still, stillest } = await scrub(off);
  const [frame, finer] = [[busy, least], [still, stillest]].map((pair) => pair.map((time) => time.toFixed(1)).join(" ms (least ") + ")");
  console.log(words + ": " + rate.toFixed(0) + " frames/s, busy " + frame + ", 95 percent below " + late.toFixed(1) + ", finer picture " + finer);
}
await browser.close();
