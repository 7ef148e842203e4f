/*
 * How does the packed page become a page?
 *
 * Only in the packed page, and its only script that stands there as such. A block holds one part or several, one behind the
 * other: an LZMA stream, a sixth smaller than deflate makes it, which no browser reads by itself; in the code of a wasm with odds
 * by the kind of place, and all odds learn at two speeds, which takes 4 % more off; written in base 123, 15 characters for 13 bytes where base64 takes more than 17.
 * www/pack/src/block.rs and stream.rs write what is read here. What the body shows, the
 * styles and the scripts come out of a block too; the policy of the page names styles and scripts by their hashes.
 * Source: Igor Pavlov, LZMA specification (2015, public domain).
 */
"use strict";
const tailvanePart = (function () {
  /**
   * The bytes of a text: 15 digits are 13 bytes, highest first. The digits are the characters from 1 to 127 in their order,
   * without line feed, carriage return, the old end of file and <.
   */
  function bytesOf(text) {
    const value = new Uint8Array(128);
    for (let sign = 1, next = 0; sign < 128; sign++) {
      value[sign] = next;
      next += [10, 13, 26, 60].includes(sign) ? 0 : 1;
    }
    const bytes = new Uint8Array((text.length / 15) * 13);
    for (let from = 0, to = 0; from < text.length; to += 13) {
      let [a, b, c, d, e] = [0, 0, 0, 0, 0];
      for (const end = from + 15; from < end; from++) {
        e = e * 123 + value[text.charCodeAt(from)];
        d = d * 123 + (e >>> 24);
        c = c * 123 + (d >>> 24);
        b = b * 123 + (c >>> 24);
        a = a * 123 + (b >>> 24);
        e &= 0xffffff;
        d &= 0xffffff;
        c &= 0xffffff;
        b &= 0xffffff;
      }
      bytes[to] = a;
      for (let byte = 0; byte < 3; byte++) {
        const shift = 16 - 8 * byte;
        bytes[to + 1 + byte] = b >>> shift;
        bytes[to + 4 + byte] = c >>> shift;
        bytes[to + 7 + byte] = d >>> shift;
        bytes[to + 10 + byte] = e >>> shift;
      }
    }
    return bytes;
  }

  // Where each kind of choice keeps its odds: how often it was a zero, of 32768. The first six: per kind of place and per state.
  const IS_MATCH = 0;
  const IS_AGAIN = 12;
  const IS_AGAIN_0 = 24;
  const IS_AGAIN_1 = 36;
  const IS_AGAIN_2 = 48;
  const IS_LONG_AGAIN_0 = 60;
  const FLAGS = 72;
  const OUTSIDE = 34;
  const LENGTH = FLAGS * (OUTSIDE + 1);
  const LENGTH_AGAIN = LENGTH + 274;
  const SLOT = LENGTH_AGAIN + 274;
  const LOW_DISTANCE = SLOT + 4 * 64;
  const ALIGN = LOW_DISTANCE + 128;
  const LITERAL = ALIGN + 16;
  const KINDS = LITERAL + (8 + 2 * (OUTSIDE + 1)) * 768;

  // What comes after an operation of wasm: the kind of place, and the kind of a second number.
  const CONSTANT = 30;
  const AFTER = new Uint8Array(256);
  const SECOND = new Uint8Array(256);
  AFTER.fill(2, 0x28, 0x36).fill(4, 0x36, 0x3f).fill(18, 2, 5).set([10, 12, 14, 16, 16], 0x20);
  AFTER.set([20, 20], 0x0c);
  AFTER.set([22, 24], 0x10);
  AFTER.set([26, 28, CONSTANT, CONSTANT], 0x41);
  AFTER.set([32, 32], 0xfc);
  SECOND.fill(6, 0x28, 0x36).fill(8, 0x36, 0x3f).set([24], 0x11);

  // One stream is read at a time: its odds and bytes; range, code and place of the range coder, in an array that keeps
  // them as plain 32 bits. Out here, where the browser compiles them best.
  // A choice's odds are the middle of two: one learns fast for good, one counts at first and then learns slowly.
  const fast = new Uint16Array(KINDS);
  const slow = new Uint16Array(KINDS);
  const seen = new Uint8Array(KINDS);
  const SPEED = Int32Array.from({ length: 127 }, (_, seen) => 655360 / (10 * seen + 16));
  const coder = new Uint32Array(3);
  let packed = null;

  // Where a byte of code stands: 0 an operation, odd a later byte of a number; the byte before; what comes then.
  let [now, before, then, left] = [0, 0, 0, 0];

  function step(byte) {
    before = now;
    if (now === 0) {
      now = AFTER[byte];
      then = SECOND[byte];
      left = byte === 0x43 ? 4 : 8;
    } else if (now === CONSTANT) {
      left -= 1;
      now = left ? CONSTANT : 0;
    } else if (byte > 127) {
      now |= 1;
    } else {
      now = then;
      then = 0;
    }
  }

  function bit(kind) {
    const quick = fast[kind];
    const calm = slow[kind];
    const count = seen[kind];
    const bound = (coder[0] >>> 15) * ((quick + calm) >> 1);
    const one = coder[1] >= bound;
    if (one) {
      coder[0] -= bound;
      coder[1] -= bound;
      fast[kind] = quick - (quick >> 4);
    } else {
      coder[0] = bound;
      fast[kind] = quick + ((32768 - quick) >> 4);
    }
    slow[kind] = calm + ((((one ? 0 : 32768) - calm) * SPEED[count]) >> 16);
    seen[kind] = count < 126 ? count + 1 : 126;
    refill();
    return one ? 1 : 0;
  }

  function refill() {
    while (coder[0] < 0x1000000) {
      coder[0] <<= 8;
      coder[1] = (coder[1] << 8) | packed[coder[2]++];
    }
  }

  /** A number of `bits` bits, highest first, each with odds that depend on those before. */
  function tree(kinds, bits) {
    let node = 1;
    for (let left = bits; left > 0; left--) {
      node = 2 * node + bit(kinds + node);
    }
    return node - (1 << bits);
  }

  /** The same, lowest bit first. */
  function reversed(kinds, bits) {
    let [node, value] = [1, 0];
    for (let place = 0; place < bits; place++) {
      const one = bit(kinds + node);
      node = 2 * node + one;
      value |= one << place;
    }
    return value;
  }

  /** Bits without odds. */
  function even(bits) {
    let value = 0;
    for (let left = bits; left > 0; left--) {
      coder[0] >>>= 1;
      const one = coder[1] >= coder[0] ? 1 : 0;
      coder[1] -= one * coder[0];
      value = 2 * value + one;
      refill();
    }
    return value;
  }

  function lengthOf(kinds) {
    if (!bit(kinds)) {
      return 2 + tree(kinds + 2, 3);
    }
    return bit(kinds + 1) ? 18 + tree(kinds + 18, 8) : 10 + tree(kinds + 10, 3);
  }

  function distanceOf(length) {
    const slot = tree(SLOT + 64 * Math.min(length - 2, 3), 6);
    if (slot < 4) {
      return slot;
    }
    const bits = (slot >>> 1) - 1;
    const base = (2 | (slot & 1)) << bits;
    return slot < 14
      ? base + reversed(LOW_DISTANCE + base - slot, bits)
      : base + (even(bits - 4) << 4) + reversed(ALIGN, 4);
  }

  /** One byte; after a match its odds depend on the byte that a longer match would have given. */
  function literal(out, at, state, distance, place) {
    const outside = at > 0 ? out[at - 1] >>> 5 : 0;
    const kinds = LITERAL + 768 * (place === OUTSIDE ? outside : 8 + (place ? OUTSIDE + 1 + place : before));
    let node = 1;
    if (state > 6) {
      let expected = out[at - distance - 1];
      while (node < 256) {
        const foreseen = (expected >>> 7) & 1;
        const one = bit(kinds + ((1 + foreseen) << 8) + node);
        node = 2 * node + one;
        expected <<= 1;
        if (one !== foreseen) {
          break;
        }
      }
    }
    while (node < 256) {
      node = 2 * node + bit(kinds + node);
    }
    return node;
  }

  /** The `size` bytes of a stream; code lies in them from `code` to `end`. */
  function expand(stream, size, code, end) {
    const out = new Uint8Array(size);
    packed = stream;
    fast.fill(16384);
    slow.fill(16384);
    seen.fill(0);
    now = before = then = 0;
    coder.set([0xffffffff, new DataView(stream.buffer).getUint32(1), 5]);
    // The latest distances, less one each, newest first; `state` tells the kinds of the latest choices.
    let [first, second, third, fourth] = [0, 0, 0, 0];
    let state = 0;
    for (let at = 0; at < size; ) {
      const coded = at >= code && at < end;
      const place = coded ? now : OUTSIDE;
      const flags = FLAGS * place + state;
      if (!bit(flags + IS_MATCH)) {
        out[at] = literal(out, at, state, first, place);
        if (coded) {
          step(out[at]);
        }
        at += 1;
        state = state < 4 ? 0 : state < 10 ? state - 3 : state - 6;
        continue;
      }
      let length;
      if (!bit(flags + IS_AGAIN)) {
        length = lengthOf(LENGTH);
        [first, second, third, fourth] = [distanceOf(length), first, second, third];
        state = state < 7 ? 7 : 10;
      } else {
        let long = true;
        if (!bit(flags + IS_AGAIN_0)) {
          long = bit(flags + IS_LONG_AGAIN_0) === 1;
        } else if (!bit(flags + IS_AGAIN_1)) {
          [first, second] = [second, first];
        } else if (!bit(flags + IS_AGAIN_2)) {
          [first, second, third] = [third, first, second];
        } else {
          [first, second, third, fourth] = [fourth, first, second, third];
        }
        length = long ? lengthOf(LENGTH_AGAIN) : 1;
        state = long ? (state < 7 ? 8 : 11) : state < 7 ? 9 : 11;
      }
      for (const last = at + length; at < last; at++) {
        out[at] = out[at - first - 1];
        if (at >= code && at < end) {
          step(out[at]);
        }
      }
    }
    return out;
  }

  const opened = new Map();

  /** The bytes of a part by its name; null when the page has none of that name. */
  function part(name) {
    if (!opened.has(name)) {
      const block = document.querySelector('script[data-block~="' + name + '"]');
      if (!block) {
        return null;
      }
      const sizes = block.dataset.bytes.split(" ").map(Number);
      const bytes = expand(bytesOf(block.textContent), sizes.reduce((sum, size) => sum + size), ...block.dataset.code.split(" ").map(Number));
      let from = 0;
      for (const [at, held] of block.dataset.block.split(" ").entries()) {
        opened.set(held, bytes.subarray(from, (from += sizes[at])));
      }
    }
    return opened.get(name);
  }

  return part;
})();

(function () {
  const text = (name) => new TextDecoder().decode(tailvanePart(name));

  function put(kind, name) {
    const element = document.createElement(kind);
    element.textContent = text(name);
    document.head.append(element);
  }

  // A copy that a browser saved as it stood holds all this already, grown old.
  document.querySelectorAll("head > style, head > script, body > :not(script, noscript)").forEach((old) => old.remove());
  put("style", "styles.css");
  document.body.insertAdjacentHTML("afterbegin", text("body.html"));
  put("script", "scripts.js");
})();
