/*
 * What does the season hold in words: which curves, which range, which events and windows, and how do they leave the page?
 *
 * The tables are the text twin of the ribbon; a click on an event goes there.
 */
Tailvane.almanac = (function () {
  const choices = Tailvane.find("list", "season-curves");
  const events = Tailvane.find("list", "season-events");
  const windows = Tailvane.find("list", "season-windows");
  const form = Tailvane.find("form", "season");
  const from = Tailvane.find("input", "season-from");
  const to = Tailvane.find("input", "season-to");
  const months = Tailvane.find("control", "months");
  const done = Tailvane.find("show", "season-done");
  let curves = "";
  let shown = "";

  function build() {
    const kept = (Tailvane.store.read("season-curves") || "").split(",");
    const list = Tailvane.core.exports().season_curves();
    const known = list.some((curve) => kept.includes(curve.key));
    choices.replaceChildren(
      ...list.map((curve) => {
        const label = document.createElement("label");
        const check = document.createElement("input");
        check.type = "checkbox";
        check.dataset.curve = curve.key;
        check.checked = known ? kept.includes(curve.key) : curve.usual;
        label.append(check, " " + curve.words);
        return label;
      })
    );
    curves = checked();
  }

  const checked = () => [...choices.querySelectorAll("input:checked")].map((check) => check.dataset.curve).join();

  function collect() {
    curves = checked();
    Tailvane.store.write("season-curves", curves);
  }

  /** Fills the tables when the ribbon was drawn anew, and something in them changed. */
  function fill(desk) {
    const table = desk.season_table();
    const key = JSON.stringify(table);
    if (!table || key === shown) {
      return;
    }
    shown = key;
    for (const [field, value] of [[from, table.from], [to, table.to]]) {
      if (!field.dataset.changed) {
        field.value = value;
      }
    }
    months.value = table.chosen ? "typed" : "orbit";
    events.replaceChildren(...table.events.map((event) => row(event.days, event.time, event.words, event.value, event.note, event.weighty)));
    windows.replaceChildren(...table.windows.map((span) => row(span.days, span.from + "\nto " + span.to, span.words, "", span.note, false)));
  }

  function row(days, time, words, value, note, weighty) {
    const line = document.createElement("tr");
    line.className = weighty ? "weighty" : "";
    const when = document.createElement("td");
    const go = document.createElement("button");
    go.type = "button";
    go.className = "quantity";
    go.title = "Goes to the time of this event.";
    go.textContent = time;
    go.addEventListener("click", () => {
      Tailvane.season.pause();
      Tailvane.desk.change((desk) => desk.scrub(days));
    });
    when.append(go);
    const what = document.createElement("th");
    what.scope = "row";
    what.textContent = words;
    const more = document.createElement("small");
    more.textContent = [value, note].filter(Boolean).join("; ");
    what.append(more);
    line.append(what, when);
    return line;
  }

  /** A range that was refused stays typed and changes nothing. */
  function range(change) {
    const took = Tailvane.desk.change(change);
    const field = took === undefined ? Tailvane.desk.refusal().field : "";
    from.setAttribute("aria-invalid", String(field === "season.from"));
    to.setAttribute("aria-invalid", String(field === "season.to"));
    if (took !== undefined) {
      delete from.dataset.changed;
      delete to.dataset.changed;
      shown = "";
      Tailvane.season.anew();
    }
  }

  function start() {
    build();
    Tailvane.season.onDrawn(fill);
    choices.addEventListener("change", () => {
      collect();
      Tailvane.desk.redraw();
    });
    for (const field of [from, to]) {
      field.addEventListener("input", () => {
        field.dataset.changed = "yes";
      });
    }
    form.addEventListener("submit", (event) => {
      event.preventDefault();
      range((desk) => desk.set_season(from.value, to.value));
    });
    const told = (words) => Tailvane.write(done, words);
    const save = (act, ending, type, make) =>
      Tailvane.onAct(act, () => {
        const text = Tailvane.desk.ask(make);
        if (text) {
          const name = Tailvane.plan.fileName("-season" + ending);
          Tailvane.save(name, type, text);
          told("Saved as " + name + ".");
        }
      });
    save("season-calendar", ".ics", "text/calendar", (desk) => desk.season_text("calendar"));
    save("season-csv", ".csv", "text/csv", (desk) => desk.season_text("csv"));
    save("season-svg", ".svg", "image/svg+xml", (desk) => desk.season_svg(Tailvane.theme.name()));
    Tailvane.onAct("season-copy", () => {
      const text = Tailvane.desk.ask((desk) => desk.season_text(Tailvane.find("control", "season-form").value));
      if (text) {
        Tailvane.copy(text, told);
      }
    });
    months.addEventListener("change", () => {
      if (months.value === "orbit") {
        range((desk) => desk.set_season("", ""));
      } else if (months.value !== "typed") {
        range((desk) => desk.set_season_months(Number(months.value)));
      }
    });
  }

  return { start, curves: () => curves };
})();
