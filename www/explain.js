/*
 * How does every control say what it does, where it stands?
 *
 * www/explain.json holds a sentence for each control, by selector; it becomes the control's title, which a pointer shows on
 * rest. With Explain on, the control under pointer, finger or focus shows it at once, and a press only explains.
 */
Tailvane.explain = (function () {
  const button = Tailvane.find("act", "explain");
  const bubble = Tailvane.find("show", "explain");
  const GAP_PX = 6;
  let on = false;

  /** The nearest thing that explains itself, and its words. */
  function wordsOf(element) {
    const titled = element.closest && element.closest("[title]");
    if (titled) {
      return [titled, titled.title];
    }
    const control = element.closest && (element.closest("button, input, select, textarea, summary, canvas") || (element.closest("label") && element.closest("label").control));
    const ids = (control && control.getAttribute("aria-describedby")) || "";
    const words = ids.split(" ").map((id) => (document.getElementById(id) || { textContent: "" }).textContent).join(" ").trim();
    return control && control.title ? [control, control.title] : words ? [control, words] : [null, ""];
  }

  function show(event) {
    const [element, words] = on ? wordsOf(event.target) : [null, ""];
    bubble.hidden = !words;
    if (!words) {
      return;
    }
    Tailvane.write(bubble, words);
    const box = element.getBoundingClientRect();
    const below = box.bottom + GAP_PX + bubble.offsetHeight <= innerHeight;
    bubble.style.left = Math.max(0, Math.min(box.left, innerWidth - bubble.offsetWidth)) + "px";
    bubble.style.top = Math.max(0, below ? box.bottom + GAP_PX : box.top - GAP_PX - bubble.offsetHeight) + "px";
  }

  function set(wanted) {
    on = wanted;
    button.setAttribute("aria-pressed", String(on));
    document.documentElement.dataset.explain = on ? "yes" : "";
    bubble.hidden = true;
  }

  /** While explaining, a press shows the words and does nothing else. */
  function hold(event) {
    if (on && event.target !== button && event.target.closest("button, input, select, label, summary")) {
      event.preventDefault();
      event.stopPropagation();
      show(event);
    }
  }

  async function start() {
    button.addEventListener("click", () => set(!on));
    for (const kind of ["pointerover", "focusin"]) {
      document.addEventListener(kind, show);
    }
    for (const kind of ["click", "pointerdown", "mousedown"]) {
      document.addEventListener(kind, hold, { capture: true });
    }
    document.addEventListener("keydown", (event) => event.key === "Escape" && on && set(false));
    const { explain } = await Tailvane.core.words();
    const name = () => {
      for (const [selector, words] of Object.entries(explain || {})) {
        for (const element of document.querySelectorAll(selector)) {
          element.title = element.title || words;
        }
      }
    };
    name();
    // Tables and lists grow controls later.
    Tailvane.desk.onRest(name);
  }

  return { start };
})();
