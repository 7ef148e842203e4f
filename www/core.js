/*
 * Where does the core come from, and what happens when it fails?
 *
 * The packed page carries the wasm in an inert data block; the unpacked page fetches it from beside itself. A core
 * that panicked is thrown away: `Tailvane.core.fresh()` makes a new one from the module that was kept.
 * No astronomy here or in any script of the page.
 */
"use strict";
const Tailvane = {};

Tailvane.core = (function () {
  let module = null;
  let sitesText = null;
  let wordsRead = null;
  let exports = null;

  /** The bytes of a data block by name, or of the file of that name beside an unpacked page; null when there is neither. */
  async function bytesOf(name) {
    const block = document.querySelector('script[data-block="' + name + '"]');
    if (block) {
      const packed = fromBase64(block.textContent);
      block.remove();
      const stream = new Blob([packed]).stream().pipeThrough(new DecompressionStream("deflate-raw"));
      return new Uint8Array(await new Response(stream).arrayBuffer());
    }
    if (document.querySelector("script[data-block]") || location.protocol === "file:" || packedPage) {
      return null;
    }
    const answer = await fetch(name);
    return answer.ok ? new Uint8Array(await answer.arrayBuffer()) : null;
  }

  const packedPage = document.querySelector("script[data-block]") !== null;

  function fromBase64(text) {
    if (Uint8Array.fromBase64) {
      return Uint8Array.fromBase64(text);
    }
    return Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));
  }

  /** Loads and compiles the core once. Throws an Error with a plain sentence where that cannot be done. */
  async function load() {
    if (typeof WebAssembly === "undefined") {
      throw new Error("This browser has WebAssembly switched off, and the page computes with it. Switch it on, or use another browser.");
    }
    const bytes = await bytesOf("core.wasm");
    if (!bytes) {
      throw new Error("The core of the page is missing. Build the page with cargo page, and open target/page/tailvane.html.");
    }
    module = await WebAssembly.compile(bytes);
    return fresh();
  }

  /** A new core from the kept module; earlier ones are forgotten. */
  function fresh() {
    exports = tailvaneCore();
    exports.initSync({ module });
    exports.start();
    return exports;
  }

  /** The text of the site table, unpacked when first asked for; "" when the page has none. */
  async function sites() {
    if (sitesText === null) {
      const bytes = await bytesOf("sites.data");
      sitesText = bytes ? linesOf(new TextDecoder().decode(bytes)) : "";
    }
    return sitesText;
  }

  /** What the controls and the walk say, unpacked when first asked for. */
  async function words() {
    if (wordsRead === null) {
      const bytes = await bytesOf("words.data");
      wordsRead = bytes ? JSON.parse(new TextDecoder().decode(bytes)) : {};
    }
    return wordsRead;
  }

  /** The table line by line again; it travels column by column, which packs smaller. */
  function linesOf(columns) {
    const [first, ...others] = columns.split("\n").map((column) => column.split("\t"));
    return first.map((code, at) => [code, ...others.map((column) => column[at])].join("\t")).join("\n");
  }

  /** What the last panic said, or "". */
  function lastWords() {
    try {
      return exports ? exports.last_panic() : "";
    } catch (failure) {
      return "";
    }
  }

  return { load, fresh, sites, words, lastWords, exports: () => exports };
})();
