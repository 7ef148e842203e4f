/*
 * How long does the season ribbon take: cold, and while one drags?
 *
 * node benches/season.mjs: opens target/page/tailvane.html in Chromium (packages of tests/browser), chooses two years about
 * the perihelion of the first comet, with a site and from the geocentre, and prints the busy time of curves, events and windows; then drags
 * the handle with every frame and prints the busy time of the ribbon alone. Reported, never asserted: it depends on the machine.
 */
import { BROWSERS, PAGE_ADDRESS, open } from "../tests/browser/browsers.mjs";

const browser = await BROWSERS.chromium();
const { page } = await open(browser, PAGE_ADDRESS, { viewport: { width: 1280, height: 800 } });
const result = await page.evaluate(async () => {
  const core = Tailvane.core.exports();
  const plan = JSON.parse(Tailvane.desk.ask((desk) => desk.plan_json()));
  const curves = core.season_curves().map((curve) => curve.key).join();
  const context = document.querySelector('[data-view="season"]').getContext("2d");
  const cold = (given) => {
    const desk = new core.Desk(JSON.stringify(given));
    desk.set_season_months(12);
    const from = performance.now();
    desk.season(1280, 300, curves);
    const drawn = performance.now();
    // The first three quarters are events and sunward windows, the rest the nights of a site.
    while (desk.season_advance(50) < 0.75) {}
    const found = performance.now();
    while (desk.season_advance(50) < 1) {}
    const nights = performance.now();
    desk.season(1280, 300, curves);
    desk.draw_season(context, "dark");
    const all = performance.now();
    const again = [];
    const days = desk.season_step(0);
    for (let step = 0; step < 60; step += 1) {
      desk.season_step(1 / 24);
      const began = performance.now();
      desk.season(1280, 300, curves);
      desk.draw_season_handle(context, "dark", NaN);
      again.push(performance.now() - began);
    }
    desk.scrub(days);
    const zooms = [];
    for (let step = 0; step < 20; step += 1) {
      const began = performance.now();
      desk.season_zoom(1.3, 600);
      desk.season(1280, 300, curves);
      desk.draw_season(context, "dark");
      zooms.push(performance.now() - began);
    }
    desk.free();
    return [drawn - from, found - drawn, nights - found, all - nights, middle(again), middle(zooms)];
  };
  const middle = (list) => list.sort((a, b) => a - b)[Math.floor(list.length / 2)];
  const rounds = (given) => {
    const all = [];
    for (let round = 0; round < 5; round += 1) {
      all.push(cold(given));
    }
    return all[0].map((_, at) => middle(all.map((one) => one[at])));
  };
  const { observer, ...geocentric } = plan;
  // The page as a person drags on it: the real slider, the real frame.
  const slider = document.querySelector('[data-control="season"]');
  const native = window.requestAnimationFrame.bind(window);
  const busy = [];
  window.requestAnimationFrame = (act) =>
    native((time) => {
      const from = performance.now();
      act(time);
      busy.push(performance.now() - from);
    });
  for (let step = 0; step < 120; step += 1) {
    slider.value = String((Number(slider.max) * step) / 120);
    slider.dispatchEvent(new Event("input"));
    await new Promise((done) => native(done));
  }
  window.requestAnimationFrame = native;
  return { site: rounds(plan), geocentre: rounds(geocentric), frame: middle(busy) };
});
for (const [words, times] of [["two years from a site", result.site], ["two years from the geocentre", result.geocentre]]) {
  const [curves, search, nights, drawing, drag, zoom] = times.map((time) => time.toFixed(1));
  console.log(words + ", cold: first picture with every curve " + curves + " ms, events and sunward windows " + search + ", nights " + nights + ", last picture " + drawing + "; dragging: ribbon " + drag + " a frame; a step of zoom " + zoom);
}
console.log("the page while the slider is dragged: busy " + result.frame.toFixed(1) + " ms a frame, sky and tails included");
await browser.close();
