/*
 * How does a sky travel: link, embed, picture, table, figure for a wiki?
 *
 * The core writes SVG, CSV and tables. A PNG is the SVG painted large; its text says what it shows. Other benches offer
 * their drawings with `Tailvane.share.offer(name, words, svg)`, where `svg(desk, theme, width, height)` gives the file.
 */
Tailvane.share = (function () {
  /** Letters and lines are made for a drawing about so wide; larger pictures are the same drawing, larger. */
  const ORDINARY_WIDTH = 1200;
  const MOST_SIDE = 8000;
  const KEPT_ADDRESS = "address";
  const done = Tailvane.find("show", "plan-done");
  const say = (words) => Tailvane.write(done, words);
  const choice = (name) => Tailvane.find("share", name);
  const views = new Map();

  function offer(name, words, svg) {
    views.set(name, svg);
    choice("view").append(new Option(words, name));
  }

  /* ---- Link and embed ---- */

  /** Where others find the page; a link to a file on this disk helps nobody else. */
  function pageAddress() {
    const typed = choice("address").value.trim();
    if (typed === "") {
      return location.href.split("#")[0];
    }
    try {
      const address = new URL(typed);
      if (["https:", "http:", "file:"].includes(address.protocol)) {
        return address.href.split("#")[0];
      }
    } catch (broken) {
      // Said below with the rest.
    }
    Tailvane.say.error("The address of the page: found " + typed.slice(0, 80) + "; expected one that begins with https://, http:// or file://");
    return null;
  }

  async function link(prefix) {
    const plan = Tailvane.desk.ask((desk) => desk.plan_json());
    const page = plan && pageAddress();
    return page && page + "#" + (prefix || "") + (await Tailvane.link.write(plan));
  }

  const html = (words) => words.replace(/[&<>"']/g, (c) => "&#" + c.charCodeAt(0) + ";");

  /** The start of an element, its attributes unable to be anything else. */
  const tag = (name, attributes) =>
    "<" + name + Object.entries(attributes).map(([key, value]) => " " + key + '="' + html(String(value)) + '"').join("") + ">";

  const titleOf = (reading) => reading.comet + ", " + reading.time_words;

  async function snippet() {
    const address = await link("embed=" + Tailvane.theme.name() + "&");
    const reading = Tailvane.desk.ask((desk) => desk.reading());
    const frame = {
      src: address,
      title: "Tailvane: " + titleOf(reading),
      sandbox: "allow-scripts allow-downloads",
      allow: "clipboard-write",
      loading: "lazy",
      width: "100%",
      height: 760,
    };
    return address && tag("iframe", frame) + "</iframe>";
  }

  /* ---- Pictures ---- */

  function sides() {
    const found = ["width", "height"].map((side) => [side, Number(choice(side).value)]);
    const bad = found.find(([, px]) => !(px >= 100 && px <= MOST_SIDE));
    if (bad) {
      Tailvane.say.error("The picture's " + bad[0] + ": found " + (choice(bad[0]).value || "nothing") + "; expected 100 to " + MOST_SIDE + " pixels");
      return null;
    }
    return found.map(([, px]) => Math.round(px));
  }

  /** The chosen drawing as SVG of the chosen size, or undefined after a refusal. */
  function svg(size) {
    const [width, height] = size;
    const larger = Math.max(1, width / ORDINARY_WIDTH);
    const theme = choice("theme").value || Tailvane.theme.name();
    const file = Tailvane.desk.ask((desk) => views.get(choice("view").value)(desk, theme, width / larger, height / larger));
    return file && file.replace(/ width="[^"]*" height="[^"]*"/, ' width="' + width + '" height="' + height + '"');
  }

  /** Whether this browser gives back the pixels that were painted; some scramble them for privacy. */
  function honest(context) {
    const painted = [18, 52, 86, 255, 220, 130, 40, 255];
    context.putImageData(new ImageData(new Uint8ClampedArray(painted), 2, 1), 0, 0);
    const read = context.getImageData(0, 0, 2, 1).data;
    return painted.every((value, at) => read[at] === value);
  }

  async function png(file, size, words) {
    const canvas = document.createElement("canvas");
    [canvas.width, canvas.height] = size;
    const context = canvas.getContext("2d");
    if (!context || !honest(context)) {
      return null;
    }
    const address = URL.createObjectURL(new Blob([file], { type: "image/svg+xml" }));
    try {
      const image = new Image();
      image.src = address;
      await image.decode();
      context.drawImage(image, 0, 0, ...size);
    } finally {
      URL.revokeObjectURL(address);
    }
    const blob = await new Promise((made) => canvas.toBlob(made, "image/png"));
    return blob && described(new Uint8Array(await blob.arrayBuffer()), words);
  }

  /** Check sum of a PNG chunk: CRC-32 (ISO 3309). */
  function checkSum(bytes) {
    let rest = -1;
    for (const byte of bytes) {
      rest ^= byte;
      for (let bit = 0; bit < 8; bit += 1) {
        rest = (rest >>> 1) ^ (rest & 1 ? 0xedb88320 : 0);
      }
    }
    return ~rest;
  }

  /** The PNG with its words as international text chunks (PNG, third edition, 11.3.3.4), after the header. */
  function described(bytes, words) {
    const HEADER_END = 33;
    const chunks = Object.entries(words).map(([key, text]) => {
      const content = new TextEncoder().encode("iTXt" + key + "\0\0\0en\0\0" + text);
      const chunk = new Uint8Array(content.length + 8);
      const view = new DataView(chunk.buffer);
      view.setUint32(0, content.length - 4);
      chunk.set(content, 4);
      view.setInt32(content.length + 4, checkSum(content));
      return chunk;
    });
    return new Blob([bytes.slice(0, HEADER_END), ...chunks, bytes.slice(HEADER_END)], { type: "image/png" });
  }

  const words = () => {
    const reading = Tailvane.desk.ask((desk) => desk.reading());
    return { Title: titleOf(reading), Description: reading.headline + " " + reading.sentence, Software: "Tailvane" };
  };

  const SCRAMBLED = "This browser scrambles pictures for privacy, so a PNG would be noise. Save the SVG instead; it is exact.";

  /** The chosen picture as PNG, or null, said. */
  async function picture() {
    const size = sides();
    const file = size && svg(size);
    if (!file) {
      return null;
    }
    const made = await png(file, size, words()).catch(() => null);
    if (!made) {
      say(SCRAMBLED);
    }
    return made;
  }

  const pictureName = (ending) => Tailvane.plan.fileName("-" + choice("view").value + ending);

  function saveSvg() {
    const size = sides();
    const file = size && svg(size);
    if (file) {
      Tailvane.save(pictureName(".svg"), "image/svg+xml", file);
      say("Saved as " + pictureName(".svg") + ".");
    }
  }

  async function savePng() {
    const made = await picture();
    if (made) {
      Tailvane.save(pictureName(".png"), "image/png", made);
      say("Saved as " + pictureName(".png") + ".");
    }
  }

  async function copyPng() {
    try {
      // Handed over as a promise, so that the press of the button still counts when the picture is ready.
      const made = picture().then((blob) => blob || Promise.reject(new Error(SCRAMBLED)));
      made.catch(() => {});
      await navigator.clipboard.write([new ClipboardItem({ "image/png": made })]);
      say("Copied.");
    } catch (refused) {
      if (done.textContent !== SCRAMBLED) {
        say("The browser refuses to copy pictures here; save it instead.");
      }
    }
  }

  /* ---- Tables ---- */

  function saveCsv() {
    const [around, step] = choice("rows").value.split(" ").map(Number);
    const csv = Tailvane.desk.ask((desk) => {
      const now = desk.reading().tdb_days;
      return desk.csv(now - around, now + around, step);
    });
    if (csv) {
      Tailvane.save(Tailvane.plan.fileName(".csv"), "text/csv", csv);
      say("Saved as " + Tailvane.plan.fileName(".csv") + ", with the columns of the command tailvane sky.");
    }
  }

  const form = () => choice("form").value;
  const table = () => Tailvane.desk.ask((desk) => desk.table(form()));

  const dataAddress = (blob) =>
    new Promise((made) => {
      const reader = new FileReader();
      reader.onload = () => made(reader.result);
      reader.readAsDataURL(blob);
    });

  /** Figure, table and link for pages that strip frames. HTML carries the picture; other forms name the file. */
  async function figure() {
    const size = sides();
    const file = size && svg(size);
    const address = file && (await link());
    if (!address) {
      return;
    }
    const made = await png(file, size, words()).catch(() => null);
    const name = pictureName(made ? ".png" : ".svg");
    const blob = made || new Blob([file], { type: "image/svg+xml" });
    const { Title, Description } = words();
    const safe = (text) => Tailvane.desk.ask((desk) => desk.safe_words(form(), text));
    const [title, caption, open] = [safe(Title), safe(Description), "Open this sky in Tailvane"];
    const numbers = table();
    const carried = form() === "html" ? await dataAddress(blob) : name;
    const text = {
      plain: () => title + "\n" + caption + "\n(" + name + ")\n\n" + numbers + "\n" + open + ":\n" + address + "\n",
      markdown: () => "![" + title + "](" + name + ")\n\n" + caption + "\n\n" + numbers + "\n[" + open + "](<" + address + ">)\n",
      wiki: () => "[[File:" + name + "|thumb|" + title + "]]\n" + caption + "\n\n" + numbers + "\n[" + address + " " + open + "]\n",
      html: () => {
        const image = tag("img", { src: carried, alt: Title, width: size[0], height: size[1] });
        return "<figure>\n" + image + "\n<figcaption>" + caption + "</figcaption>\n</figure>\n" + numbers + "<p>" + tag("a", { href: address }) + open + "</a></p>\n";
      },
    }[form()]();
    await Tailvane.copy(text, (said) => say(said + (form() === "html" ? "" : " The figure is saved as " + name + ": put it beside.")), form() === "html" ? text : "");
    if (form() !== "html") {
      Tailvane.save(name, blob.type, blob);
    }
  }

  const HOST_SCRIPT = `<script>
addEventListener("message", (event) => {
  for (const frame of document.querySelectorAll("iframe")) {
    if (event.source === frame.contentWindow && event.data && event.data.tailvane === "height") {
      frame.height = Math.min(2000, Math.max(200, Number(event.data.height) || 760));
    }
  }
});
<\/script>`;

  function start() {
    offer("sky", "Sky plane", (desk, ...as) => desk.svg_of("sky", ...as));
    offer("orbit", "Orbit view", (desk, ...as) => desk.svg_of("orbit", ...as));
    offer("season", "Season ribbon", (desk, theme) => desk.season_svg(theme));
    offer("card", "Field card", (desk, theme) => desk.card_svg(theme));
    offer("night", "Night", (desk, ...as) => desk.night_svg(...as));
    offer("horizon", "Comet over the horizon", (desk, ...as) => desk.horizon_svg(...as));
    offer("map", "Dust by beta and age", (desk, ...as) => desk.svg_of("map", ...as));
    const address = choice("address");
    address.value = Tailvane.store.read(KEPT_ADDRESS) || "";
    address.placeholder = location.href.split("#")[0].slice(0, 200);
    address.addEventListener("change", () => pageAddress() && Tailvane.store.write(KEPT_ADDRESS, address.value.trim()));
    const acts = {
      "copy-link": async () => {
        const made = await link();
        return made && Tailvane.copy(made, say);
      },
      "copy-embed": async () => {
        const made = await snippet();
        return made && Tailvane.copy(made, say);
      },
      "copy-host": () => Tailvane.copy(HOST_SCRIPT, say),
      "save-svg": saveSvg,
      "save-png": savePng,
      "copy-png": copyPng,
      "save-csv": saveCsv,
      "copy-wiki": () => Tailvane.copy(table(), say),
      "copy-figure": figure,
    };
    for (const [name, act] of Object.entries(acts)) {
      Tailvane.onAct(name, act);
    }
  }

  return { start, offer, link };
})();
