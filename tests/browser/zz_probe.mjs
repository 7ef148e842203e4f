import { BROWSERS, PAGE_ADDRESS, open, settled, paste, typeTime, rested } from "./browsers.mjs";
import { readFileSync, writeFileSync } from "node:fs";
const browser = await BROWSERS.chromium();
const { page, noise } = await open(browser, PAGE_ADDRESS);
const openOnly = (names) => page.$$eval(".bench", (all, names) => all.forEach((b) => (b.open = names.includes(b.dataset.bench))), names);
await openOnly(["night"]);
await settled(page);
const shot = async (name) => page.screenshot({ path: "/tmp/night_shots/" + name + ".png" });
await page.setViewport({ width: 1280, height: 1400 });
await settled(page); await new Promise(r => setTimeout(r, 400));
await shot("night-dark");
console.log(await page.$eval('[data-say="night-best"]', e => e.textContent));
console.log(await page.$eval('#night-words', e => e.textContent));
console.log(await page.$eval('#horizon-words', e => e.textContent));
console.log(await page.$eval('[data-show="exposure"]', e => e.textContent));
for (const theme of ["red", "paper"]) {
  await page.select('[data-control="theme"]', theme);
  await settled(page); await new Promise(r => setTimeout(r, 300));
  await shot("night-" + theme);
}
await page.select('[data-control="theme"]', "dark");
await page.setViewport({ width: 390, height: 2600 });
await settled(page); await new Promise(r => setTimeout(r, 400));
await shot("night-390");
await page.setViewport({ width: 1280, height: 900 });
// board
const lines = [];
for (let i = 0; i < 1000; i++) {
  const r = (a, b) => (a + (b - a) * (((i * 7919 + 13 * Math.round(a * 10 + b)) * 2654435761 % 4294967296) / 4294967296)).toFixed(5);
  lines.push(`name = Invented ${i + 1}\nT = 2031-0${1 + i % 9}-${String(1 + i % 28).padStart(2, "0")}.5 TT\nq = ${r(0.2, 4)}\ne = ${r(0.9, 1.002)}\nperi = ${r(0, 360)}\nnode = ${r(0, 359)}\ni = ${r(1, 179)}\nepoch = 2031-01-01.0 TT\nH = ${r(4, 12)}\nphotometric index n = 4\n`);
}
await openOnly(["comet"]);
await paste(page, lines.join("\n"));
console.log(await page.$eval('[data-show="found"]', e => e.textContent));
await page.evaluate(() => Tailvane.desk.change((d) => d.set_site({ name: "Invented hill", longitude_deg: "23.4", latitude_deg: "37.1", height_m: "640" })));
await rested(page);
await openOnly(["board"]);
await new Promise(r => setTimeout(r, 2500));
console.log("board ms", await page.$eval('[data-list="board"]', e => e.dataset.milliseconds), await page.$eval('[data-show="board-progress"]', e => e.textContent));
console.log("board again", await page.evaluate(() => { const t = []; for (let k = 0; k < 7; k++) { const a = performance.now(); Tailvane.desk.ask((d) => d.make_board([])); t.push(performance.now() - a); } return t.map(x => x.toFixed(0)).join(" "); }));
console.log("rows", await page.evaluate(() => { const a = performance.now(); Tailvane.desk.ask((d) => d.board_rows("total_magnitude", false, 50)); return performance.now() - a; }));
console.log("sunward of 8", await page.evaluate(() => { const a = performance.now(); for (let i=0;i<10;i++) Tailvane.desk.ask((d) => d.board_sunward(8)); return (performance.now() - a)/10; }));
await shot("board-1280");
await page.$eval('[data-column="next_crossing_time"] button', b => b.click());
await settled(page);
console.log(await page.$$eval('[data-list="board"] tbody tr', rows => rows.slice(0, 3).map(r => r.innerText.replace(/\s+/g, " ")).join("\n")));
console.log("noise", noise);
const frames = await page.evaluate(async () => { document.querySelectorAll(".bench").forEach(b => (b.open = b.dataset.bench === "night")); const t = []; for (let i = 0; i < 30; i++) { const a = performance.now(); Tailvane.desk.ask(d => { d.scrub(11400 + i * 1.0); d.night(); d.night_table(); }); t.push(performance.now() - a); } t.sort((a,b)=>a-b); return t[15]; });
console.log("new night ms", frames);
await browser.close();
