/*
 * How do the tests get at real browsers, the page and the command line?
 *
 * Debian's own browsers, a fresh profile each. Firefox gets back its protection of local files, which the test driver
 * switches off. Everything a page says or asks for is collected, so that silence can be asserted.
 */
import { spawn, spawnSync } from "node:child_process";
import { existsSync } from "node:fs";
import path from "node:path";
import { fileURLToPath, pathToFileURL } from "node:url";
import { inflateRawSync } from "node:zlib";
import puppeteer from "puppeteer-core";

export const ROOT = path.resolve(path.dirname(fileURLToPath(import.meta.url)), "../..");
export const PAGE_FILE = path.join(ROOT, "target/page/tailvane.html");
export const PAGE_ADDRESS = pathToFileURL(PAGE_FILE).href;
const COMMAND = path.join(ROOT, "target/release/tailvane");
const PACK = path.join(ROOT, "target/debug/tailvane-pack");

/** The first of these programs that exists. */
function program(names) {
  const found = names.find((name) => existsSync(name));
  if (!found) {
    throw new Error("none of these is installed: " + names.join(", ") + "; run tests/all.sh, which installs what is missing");
  }
  return found;
}

export const BROWSERS = {
  chromium: () =>
    puppeteer.launch({
      executablePath: program(["/usr/bin/chromium", "/usr/bin/chromium-browser", "/usr/bin/google-chrome"]),
      headless: true,
      // A sandbox needs a user that is not root; containers often have none.
      args: process.getuid && process.getuid() === 0 ? ["--no-sandbox"] : [],
      defaultViewport: { width: 1280, height: 800 },
    }),
  firefox: (prefs = {}) =>
    puppeteer.launch({
      browser: "firefox",
      executablePath: program(["/usr/bin/firefox-esr", "/usr/bin/firefox"]),
      headless: true,
      defaultViewport: { width: 1280, height: 800 },
      extraPrefsFirefox: { "security.fileuri.strict_origin_policy": true, ...prefs },
    }),
};

/**
 * Opens an address in a new tab. `noise` collects console messages, uncaught errors and policy violations; `requests` every
 * address asked for.
 */
export async function open(browser, address, { waitReady = true, viewport } = {}) {
  const page = await browser.newPage();
  const noise = [];
  const requests = [];
  page.on("console", (message) => noise.push(message.type() + ": " + message.text()));
  page.on("pageerror", (error) => noise.push("uncaught: " + (error.message || error)));
  page.on("request", (request) => requests.push(request.url()));
  if (viewport) {
    await page.setViewport(viewport);
  }
  await page.goto(address);
  if (waitReady) {
    await ready(page);
  }
  return { page, noise, requests };
}

/** Waits until the page shows its first picture. */
export async function ready(page) {
  await page.waitForFunction(() => document.documentElement.dataset.ready === "yes", { timeout: 30000 });
  await settled(page);
}

/** Waits two frames, so that what was asked for is drawn. */
export const settled = (page) => page.evaluate(() => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done))));

/** Waits until scrubbing counts as rested, the address is written, and the finer picture is drawn. */
export async function rested(page) {
  await settled(page);
  await new Promise((done) => setTimeout(done, 700));
  await page.waitForFunction(() => document.querySelector('[data-view="sky"]').dataset.picture === "fine");
  await settled(page);
}

/** Starts the builder's own loopback server; resolves with its address and a way to stop it. */
export function serve() {
  const child = spawn(PACK, ["--serve", "--port", "0"], { cwd: ROOT });
  return new Promise((done, failed) => {
    let text = "";
    child.stdout.on("data", (data) => {
      text += data;
      const found = /Serving (http:\/\/127\.0\.0\.1:\d+\/)/.exec(text);
      if (found) {
        done({ address: found[1], stop: () => child.kill() });
      }
    });
    child.on("error", failed);
    child.on("exit", (code) => failed(new Error("the server ended with " + code + ": " + text)));
  });
}

/** Rows of the command line for a plan: objects by column, fields as the texts that were printed. */
export function commandLineRows(plan, args = []) {
  const run = spawnSync(COMMAND, ["sky", "-", ...args], { input: plan, encoding: "utf8" });
  if (run.status !== 0) {
    throw new Error("tailvane sky: " + run.stderr);
  }
  const [header, ...rows] = parseCsv(run.stdout);
  return rows.map((row) => Object.fromEntries(header.map((key, at) => [key, row[at]])));
}

/** Rows of CSV (RFC 4180). */
export function parseCsv(text) {
  const rows = [[]];
  const field = /("(?:[^"]|"")*"|[^,\r\n]*)(,|\r?\n|$)/y;
  while (field.lastIndex < text.length) {
    const [, raw, end] = field.exec(text);
    rows.at(-1).push(raw.startsWith('"') ? raw.slice(1, -1).replaceAll('""', '"') : raw);
    if (end !== ",") {
      rows.push([]);
    }
  }
  return rows.filter((row) => row.length > 0);
}

/** The plan in the page's address. */
export async function planOf(page) {
  await rested(page);
  const hash = await page.evaluate(() => location.hash);
  return planIn(hash);
}

/** The plan in a fragment, readable or packed, as another program would read it. */
export function planIn(fragment) {
  const coded = fragment.replace(/^#(embed(=[a-z]+)?&)?plan=/, "");
  return coded.startsWith("~1.") ? inflateRawSync(Buffer.from(coded.slice(3), "base64url")).toString() : decodeURIComponent(coded);
}

/** The numbers of the read-out table by quantity, in full precision. */
export const numbersOf = (page) =>
  page.$$eval("[data-quantity]", (cells) => Object.fromEntries(cells.map((cell) => [cell.dataset.quantity, cell.dataset.value])));

/** The text of a hook such as `[data-say="error"]`, or "" where it is hidden. */
export const textOf = (page, selector) =>
  page.evaluate((s) => {
    const element = document.querySelector(s);
    return element && !element.hidden ? element.textContent : "";
  }, selector);

/** Puts text into the elements box as a paste does. */
export async function paste(page, text) {
  await page.evaluate((pasted) => {
    const box = document.querySelector('[data-input="elements"]');
    box.value = pasted;
    box.dispatchEvent(new Event("paste"));
  }, text);
  await page.evaluate(() => new Promise((done) => setTimeout(done, 20)));
  await settled(page);
}

/** Types a time into the date field and leaves it with Enter. */
export async function typeTime(page, text) {
  const field = await page.$('[data-input="time"]');
  await field.evaluate((element) => element.select());
  await field.type(text);
  await field.press("Enter");
  await settled(page);
}
