/*
 * How long does the page take from its opening to the first picture?
 *
 * node benches/opening.mjs [RUNS]: opens target/page/tailvane.html from disk in a fresh Chromium each time (packages of
 * tests/browser) and prints, from the beginning of the navigation: when the scripts begin, when the core is there, when the
 * first picture is drawn, and when the first one with dust. Reported, never asserted: it depends on the machine.
 */
import { BROWSERS, PAGE_ADDRESS } from "../tests/browser/browsers.mjs";

const runs = Number(process.argv[2] || 9);

/** Notes when each thing is first seen; runs in the page before any of its scripts. */
function watch() {
  const seen = (window.seen = {});
  const note = (what) => (seen[what] = seen[what] || performance.now());
  new MutationObserver(() => {
    const picture = document.querySelector("[data-view=sky]")?.dataset.picture;
    if (document.querySelector("script[data-block]")) note("scripts");
    if (document.documentElement.dataset.theme) note("core");
    if (picture) note("picture");
    if (picture === "coarse" || picture === "fine") note("dust");
  }).observe(document, { subtree: true, childList: true, attributes: true });
}

const found = [];
for (let run = 0; run < runs; run += 1) {
  const browser = await BROWSERS.chromium();
  const page = await browser.newPage();
  await page.evaluateOnNewDocument(watch);
  await page.goto(PAGE_ADDRESS);
  await page.waitForFunction(() => window.seen.dust, { polling: 50 });
  found.push(await page.evaluate(() => window.seen));
  await browser.close();
}
for (const what of ["scripts", "core", "picture", "dust"]) {
  const times = found.map((seen) => seen[what]).sort((a, b) => a - b);
  console.log(what.padEnd(8) + " least " + times[0].toFixed(0) + " ms, middle " + times[Math.floor(times.length / 2)].toFixed(0) + " ms");
}
