/*
 * How does text get to the clipboard, and what when the browser refuses?
 *
 * A refused text is shown selected in a box, so that it is never lost. Notices stand above the sky until closed.
 */
Tailvane.copy = (function () {
  const box = Tailvane.find("box", "copy");
  const field = Tailvane.find("show", "copy");
  let before = null;

  function show(text) {
    before = document.activeElement;
    box.hidden = false;
    field.value = text;
    field.focus();
    field.select();
  }

  Tailvane.onAct("close-copy", () => {
    box.hidden = true;
    field.value = "";
    if (before) {
      before.focus();
    }
  });

  /** Copies `text`, also as HTML where given, and tells `said` how that went. */
  return async (text, said, html) => {
    try {
      if (html) {
        const kinds = { "text/plain": text, "text/html": html };
        const item = Object.fromEntries(Object.entries(kinds).map(([kind, content]) => [kind, new Blob([content], { type: kind })]));
        await navigator.clipboard.write([new ClipboardItem(item)]);
      } else {
        await navigator.clipboard.writeText(text);
      }
      said("Copied.");
    } catch (refused) {
      show(text);
      said("The browser refuses to copy here; the text stands selected above the sky.");
    }
  };
})();

/** Says something above the sky, with buttons; each closes the notice. `[words, act]` makes a button. */
Tailvane.notice = (words, ...buttons) => {
  const line = document.createElement("div");
  line.className = "notice";
  const text = document.createElement("p");
  text.setAttribute("role", "status");
  text.textContent = words;
  line.append(text);
  for (const [name, act] of [...buttons, ["Close", () => {}]]) {
    const button = document.createElement("button");
    button.type = "button";
    button.textContent = name;
    button.addEventListener("click", () => {
      line.remove();
      act();
    });
    line.append(button);
  }
  Tailvane.find("list", "notices").append(line);
};
