/*
 * How does an address carry a plan?
 *
 * The fragment is `#plan=` and the JSON of the plan, percent-encoded; or, where that is long, `#plan=~1.` and the JSON
 * deflated (RFC 1951) as base64url (RFC 4648). `#embed&plan=` asks for the compact page, `#embed=paper&plan=` in those colours.
 * The plan comes last. Both forms stay readable; a later form gets the next number. Browsers never send fragments.
 * Whatever comes in is bounded before it is unpacked, and unpacking stops at its bound.
 */
Tailvane.link = (function () {
  const MOST_IN_ADDRESS = 200000;
  const MOST_IN_PLAN = 1000000;
  const LONG = 1500;
  const DEFLATED = "~1.";
  const SHAPE = /^#(?:(embed)(?:=([a-z]+))?&?)?(?:plan=([^]*))?$/;

  function refuse(found, expected) {
    throw { refused: true, message: "The plan in the address: found " + found + "; expected " + expected };
  }

  /** What a fragment asks for: whether to embed, in which colours, and the coded plan or null. */
  function parts(hash) {
    const [, embed, colours, plan] = SHAPE.exec(hash) || [];
    return { embed: Boolean(embed), colours: colours || "", plan: plan === undefined ? null : plan };
  }

  /** The text of the plan in a fragment, or null where there is none. Throws a refusal. */
  async function read(hash) {
    const coded = parts(hash).plan;
    if (coded === null) {
      return null;
    }
    if (coded.length > MOST_IN_ADDRESS) {
      refuse(Math.round(coded.length / 1000) + " kB", "at most " + MOST_IN_ADDRESS / 1000 + " kB; open such a plan as a file");
    }
    if (coded.startsWith(DEFLATED)) {
      return inflate(coded.slice(DEFLATED.length));
    }
    if (/^~\d*\./.test(coded)) {
      refuse("a form of link that this Tailvane does not know", "a plan, or one packed in form 1; a newer Tailvane made the link");
    }
    try {
      return decodeURIComponent(coded);
    } catch (broken) {
      return refuse("broken percent-encoding", "the JSON of a plan, percent-encoded");
    }
  }

  async function inflate(coded) {
    const whole = "a whole link; it may have been cut off or changed on its way";
    const chunks = [];
    let total = 0;
    try {
      const letters = atob(coded.replace(/-/g, "+").replace(/_/g, "/"));
      const packed = Uint8Array.from(letters, (letter) => letter.charCodeAt(0));
      const reader = new Blob([packed]).stream().pipeThrough(new DecompressionStream("deflate-raw")).getReader();
      for (let next = await reader.read(); !next.done; next = await reader.read()) {
        total += next.value.length;
        if (total > MOST_IN_PLAN) {
          reader.cancel().catch(() => {});
          break;
        }
        chunks.push(next.value);
      }
      if (total <= MOST_IN_PLAN) {
        return new TextDecoder("utf-8", { fatal: true }).decode(await new Blob(chunks).arrayBuffer());
      }
    } catch (broken) {
      refuse("a packed plan that cannot be unpacked", whole);
    }
    return refuse("a plan that unpacks to more than " + MOST_IN_PLAN / 1000 + " kB", "at most that");
  }

  /** The shorter of both forms; the readable one while it is not long. */
  async function write(plan) {
    const json = JSON.stringify(JSON.parse(plan));
    // Parentheses and quotes end a link in many wikis and mails.
    const readable = encodeURIComponent(json).replace(/[!'()*]/g, (c) => "%" + c.charCodeAt(0).toString(16).toUpperCase());
    if (readable.length <= LONG || typeof CompressionStream === "undefined") {
      return "plan=" + readable;
    }
    const stream = new Blob([json]).stream().pipeThrough(new CompressionStream("deflate-raw"));
    const packed = new Uint8Array(await new Response(stream).arrayBuffer());
    let letters = "";
    for (const byte of packed) {
      letters += String.fromCharCode(byte);
    }
    return "plan=" + DEFLATED + btoa(letters).replace(/\+/g, "-").replace(/\//g, "_").replace(/=+$/, "");
  }

  return { parts, read, write, MOST_IN_PLAN };
})();
