/*
 * Do three embeds on one page stay at sixty frames a second while one of them is scrubbed?
 *
 * node benches/embeds.mjs: serves target/page/tailvane.html and a host page on loopback (another origin for the frames), all three in
 * sight, and scrubs the middle one by a quarter of an hour with every frame, in both browsers. Reported, never asserted.
 */
import { readFileSync } from "node:fs";
import { createServer } from "node:http";
import { BROWSERS, PAGE_FILE } from "../tests/browser/browsers.mjs";

const listen = (body) =>
  new Promise((done) => {
    const server = createServer((request, answer) => {
      answer.writeHead(200, { "Content-Type": "text/html; charset=utf-8" });
      answer.end(body);
    }).listen(0, "127.0.0.1", () => done("http://127.0.0.1:" + server.address().port + "/"));
  });

const page = await listen(readFileSync(PAGE_FILE));
const frame = '<iframe title="Sky" sandbox="allow-scripts allow-downloads" width="600" height="700" src="' + page + '#embed"></iframe>';
const host = await listen('<!DOCTYPE html><title>Host</title><link rel="icon" href="data:,">' + frame.repeat(3));

for (const name of ["chromium", "firefox"]) {
  const browser = await BROWSERS[name]();
  const tab = await browser.newPage();
  await tab.setViewport({ width: 1900, height: 800 });
  await tab.goto(host);
  const frames = await Promise.all((await tab.$$("iframe")).map((handle) => handle.contentFrame()));
  await Promise.all(frames.map((one) => one.waitForFunction(() => document.documentElement.dataset.ready === "yes")));
  await new Promise((done) => setTimeout(done, 1500));
  const { rate, busy, late } = await frames[1].evaluate(async () => {
    const work = [];
    const native = window.requestAnimationFrame.bind(window);
    window.requestAnimationFrame = (act) =>
      native((time) => {
        const from = performance.now();
        act(time);
        work.push(performance.now() - from);
      });
    let now = Tailvane.desk.ask((desk) => desk.reading().tdb_days);
    const count = 240;
    const started = performance.now();
    for (let step = 0; step < count; step += 1) {
      now += 1 / 96;
      Tailvane.desk.change((desk) => desk.scrub(now));
      await new Promise((done) => native(done));
    }
    const rate = (1000 * count) / (performance.now() - started);
    work.sort((a, b) => a - b);
    return { rate, busy: work[Math.floor(work.length / 2)], late: work[Math.floor(work.length * 0.95)] };
  });
  console.log(name + ": " + rate.toFixed(0) + " frames/s, busy " + busy.toFixed(1) + " ms (95 percent below " + late.toFixed(1) + ")");
  await browser.close();
}
process.exit(0);
