/*
 * Where does the core come from, and what happens when it fails?
 *
 * The packed page carries the wasm in an inert block (see unpack.js); the unpacked page fetches it from beside itself. A core
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

  /** The bytes of a part of the packed page, or of the file of that name beside an unpacked one; null when there is neither. */
  async function bytesOf(name) {
    if (typeof tailvanePart === "function") {
      return tailvanePart(name);
    }
    if (location.protocol === "file:") {
      return null;
    }
    const answer = await fetch(name);
    return answer.ok ? new Uint8Array(await answer.arrayBuffer()) : null;
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
      const [words, numbers] = [await bytesOf("sites.data"), await bytesOf("sites.numbers")];
      sitesText = words && numbers ? linesOf(new TextDecoder().decode(words), numbers) : "";
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

  /** The lines of the site table, which travels as www/pack/src/sites.rs says. */
  function linesOf(words, numbers) {
    const [codes, names] = words.split("\n").map((column) => column.split("\t"));
    const number = (column, row) =>
      [3, 2, 1, 0].reduce((sum, byte) => sum * 256 + numbers[(4 * column + byte) * codes.length + row], 0);
    return codes
      .map((code, row) => {
        const along = number(1, row) / 1e6;
        const left = number(2, row);
        const size = left >> 1;
        const surface = Math.floor(Math.sqrt(Math.max(0, 1 - along * along) * 0.99330562) * 1e6 + 0.5);
        const across = surface + (size % 2 ? -(size + 1) / 2 : size / 2);
        return [code, number(0, row) / 1e5, along, (left % 2 ? -across : across) / 1e6, names[row]].join("\t");
      })
      .join("\n");
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
