/*
 * How is one night shown: twilights, altitudes, the best window, the tails over the horizon?
 *
 * The core computes, draws and words it. The night is that of the chosen time; what is typed or pressed here moves that time.
 */
Tailvane.night = (function () {
  const bench = Tailvane.find("bench", "night");
  const box = Tailvane.find("box", "night");
  const none = Tailvane.find("show", "night-none");
  const date = Tailvane.find("input", "night-date");
  const laws = Tailvane.find("form", "night");
  const absences = Tailvane.find("list", "night-absences");
  const table = Tailvane.find("list", "night");
  const form = Tailvane.find("control", "night-form");
  const done = Tailvane.find("show", "night-done");
  const views = ["night", "horizon"].map((name) => {
    const canvas = Tailvane.find("view", name);
    return { name, canvas, context: canvas.getContext("2d", { alpha: false }) };
  });
  const strip = views[0].canvas;
  let shown = "";
  let fields = "";
  let best = 0;
  let now = 0;

  /** The text twins of the drawings, which are there whether the bench is open or not. */
  function tell(night) {
    Tailvane.write(document.getElementById("night-words"), night ? night.words : none.textContent);
    Tailvane.write(document.getElementById("horizon-words"), night ? night.horizon : none.textContent);
  }

  const go = (days) => Tailvane.desk.change((desk) => desk.scrub(days));

  function frame(reading, desk) {
    now = reading.tdb_days;
    none.hidden = reading.at_site;
    box.hidden = !reading.at_site;
    if (!bench.open || !reading.at_site) {
      return;
    }
    const night = desk.night();
    best = night.best_days;
    Tailvane.write(Tailvane.find("say", "night-best"), night.best);
    tell(night);
    Tailvane.write(Tailvane.find("show", "exposure"), night.exposure);
    Tailvane.write(Tailvane.find("show", "criterion"), night.criterion);
    Tailvane.write(Tailvane.find("show", "night-magnitude"), night.magnitude);
    if (document.activeElement !== date) {
      date.value = night.date;
    }
    const law = JSON.stringify(night.fields);
    if (law !== fields) {
      fields = law;
      for (const field of laws.querySelectorAll("[data-night]")) {
        field.value = night.fields[field.dataset.night];
      }
    }
    const key = night.number + reading.comet;
    if (key !== shown) {
      shown = key;
      // The sentence on the best window says what is missing itself.
      const missing = night.absences.filter((words) => !night.best.includes(words));
      absences.replaceChildren(...missing.map((words) => Tailvane.element("li", words)));
      fill(desk.night_table());
    }
    for (const { name, canvas, context } of views) {
      draw(desk, name, canvas, context);
    }
  }

  function draw(desk, name, canvas, context) {
    const { clientWidth: width, clientHeight: height } = canvas;
    if (width < 1 || height < 1) {
      return;
    }
    Tailvane.drawings.fit(canvas, context, { width, height });
    desk["draw_" + name](context, Tailvane.theme.name(), width, height);
  }

  function fill([sheet, times]) {
    const heads = ["UTC", ...sheet.columns.map(([, words, unit]) => Tailvane.headed(words, unit))];
    table.tHead.replaceChildren(Tailvane.element("tr", "", ...heads.map((words) => Tailvane.element("th", words))));
    table.tHead.querySelectorAll("th").forEach((head) => (head.scope = "col"));
    table.tHead.rows[0].cells[1].dataset.cell = "event";
    table.tBodies[0].replaceChildren(
      ...sheet.rows.map((row, at) => {
        const time = Tailvane.element("button", times[at].slice(11, 16));
        time.type = "button";
        time.className = "bare";
        time.title = "Goes to this time of the night.";
        // For pointers: by keys, the strip takes arrows and the field above any time.
        time.tabIndex = -1;
        time.setAttribute("aria-label", "Go to " + times[at]);
        time.addEventListener("click", () => go(row.goal));
        return Tailvane.element("tr", "", Tailvane.element("td", "", time), ...Tailvane.cells(sheet, row));
      })
    );
  }

  function useDate(event) {
    event.preventDefault();
    const took = Tailvane.desk.change((desk) => desk.go_to_night(date.value));
    date.setAttribute("aria-invalid", String(took === undefined));
    if (took !== undefined) {
      Tailvane.season.pause();
    }
  }

  function useLaws(event) {
    event.preventDefault();
    const typed = {};
    for (const field of laws.querySelectorAll("[data-night]")) {
      typed[field.dataset.night] = field.value;
    }
    Tailvane.desk.change((desk) => desk.set_night(typed));
  }

  function toPointer(event) {
    const bounds = strip.getBoundingClientRect();
    go(Tailvane.desk.ask((desk) => desk.night_time_at(strip.clientWidth, strip.clientHeight, event.clientX - bounds.left)));
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    Tailvane.desk.onRest(() => bench.open || tell(Tailvane.desk.ask((desk) => desk.night())));
    const observer = new ResizeObserver(Tailvane.desk.redraw);
    views.forEach(({ canvas }) => observer.observe(canvas.parentElement));
    bench.addEventListener("toggle", Tailvane.desk.redraw);
    Tailvane.find("form", "night-date").addEventListener("submit", useDate);
    laws.addEventListener("submit", useLaws);
    for (const button of document.querySelectorAll("[data-step-nights]")) {
      button.addEventListener("click", () => go(now + Number(button.dataset.stepNights)));
    }
    Tailvane.onAct("night-best", () => go(best));
    strip.addEventListener("pointerdown", (event) => {
      strip.setPointerCapture(event.pointerId);
      toPointer(event);
    });
    strip.addEventListener("pointermove", (event) => strip.hasPointerCapture(event.pointerId) && toPointer(event));
    strip.addEventListener("keydown", (event) => {
      const minutes = { ArrowLeft: -10, ArrowRight: 10, PageDown: -60, PageUp: 60 }[event.key];
      if (minutes) {
        event.preventDefault();
        go(now + minutes / 1440);
      }
    });
    Tailvane.onAct("save-night", () => Tailvane.save("night-" + date.value + ".csv", "text/csv", Tailvane.desk.ask((desk) => desk.night_csv())));
    Tailvane.onAct("copy-night", () => Tailvane.copy(Tailvane.desk.ask((desk) => desk.night_text(form.value)), (words) => Tailvane.write(done, words)));
  }

  return { start };
})();

/** An element with this text, and with these children. */
Tailvane.element = (name, text, ...children) => {
  const element = document.createElement(name);
  element.textContent = text;
  element.append(...children);
  return element;
};

/** The cells of a row of a core's table, each with its key and its full value. */
Tailvane.cells = (sheet, row) =>
  row.cells.map((words, at) => {
    const cell = Tailvane.element("td", words);
    cell.dataset.cell = sheet.columns[at][0];
    cell.dataset.value = row.values[at];
    return cell;
  });

/** A column's name with its unit. */
Tailvane.headed = (words, unit) => (unit ? words + ", " + unit : words);
