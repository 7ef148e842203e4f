/*
 * How are the tails chosen: laws in the plan, layers in the browser?
 *
 * The core names every law, its range, default and effect; this script builds the fields from that and hands all of them
 * back at each change. A refused value stays in its field, marked, and the last good picture stays. Layers are kept in
 * the browser and not in the plan.
 */
Tailvane.tails = (function () {
  const KEPT = "layers";
  const form = Tailvane.find("form", "tails");
  const groups = Tailvane.find("list", "laws");
  const presets = Tailvane.find("list", "presets");
  const axes = Tailvane.find("list", "ion");
  const done = Tailvane.find("show", "tails-done");
  const layerBoxes = [...document.querySelectorAll("[data-layer]")];
  const layerChoices = [...document.querySelectorAll("[data-layer-choice]")];
  const fields = new Map();
  let shown = "";
  let chosen = null;

  /** What is drawn, as the core takes it. */
  function layers() {
    if (!chosen) {
      restoreLayers();
    }
    return chosen;
  }

  function readLayers() {
    chosen = {};
    for (const box of layerBoxes) {
      chosen[box.dataset.layer] = box.checked;
    }
    for (const choice of layerChoices) {
      chosen[choice.dataset.layerChoice] = Number(choice.value);
    }
  }

  function onLayers() {
    readLayers();
    Tailvane.store.write(KEPT, JSON.stringify(chosen));
    Tailvane.desk.redraw();
  }

  function restoreLayers() {
    let kept = {};
    try {
      kept = JSON.parse(Tailvane.store.read(KEPT) || "{}") || {};
    } catch (broken) {
      kept = {};
    }
    for (const box of layerBoxes) {
      if (typeof kept[box.dataset.layer] === "boolean") {
        box.checked = kept[box.dataset.layer];
      }
    }
    for (const choice of layerChoices) {
      if ([...choice.options].some((option) => option.value === String(kept[choice.dataset.layerChoice]))) {
        choice.value = String(kept[choice.dataset.layerChoice]);
      }
    }
    readLayers();
  }

  function element(tag, look, words) {
    const made = document.createElement(tag);
    made.className = look;
    made.textContent = words || "";
    return made;
  }

  function build(group, at) {
    const box = element("details", "inner laws");
    box.open = at < 2;
    const summary = element("summary", "", group.words);
    box.append(summary, ...group.fields.map(field));
    return box;
  }

  function field(law) {
    const id = "law-" + law.key.replace(".", "-");
    const box = element("div", "law");
    const label = element("label", "", law.words + (law.unit ? ", " + law.unit : ""));
    label.htmlFor = id;
    const input = document.createElement("input");
    input.id = id;
    input.type = "text";
    input.inputMode = "decimal";
    input.autocomplete = "off";
    input.dataset.law = law.key;
    const help = element("p", "help", law.effect + " " + law.range + ".");
    help.id = id + "-help";
    input.setAttribute("aria-describedby", help.id);
    const beside = element("output", "radius");
    beside.htmlFor = id;
    beside.hidden = !law.radius;
    box.append(label, input, beside, help);
    fields.set(law.key, { input, beside: law.radius ? beside : null });
    input.addEventListener("input", showRadii);
    return box;
  }

  function showRadii() {
    const value = (key) => fields.get(key).input.value;
    for (const { input, beside } of fields.values()) {
      if (beside) {
        const words = Tailvane.core.exports().grain_radius(input.value, value("grain_density_g_cm3"), value("pressure_efficiency"));
        Tailvane.write(beside, words ? "grains of " + words : "");
      }
    }
  }

  function write(values) {
    for (const [key, { input }] of fields) {
      input.value = values.get(key) || "";
      input.removeAttribute("aria-invalid");
    }
    showRadii();
  }

  function typed() {
    return [...fields].map(([key, { input }]) => [key, input.value]);
  }

  function use(values) {
    const took = Tailvane.desk.change((desk) => desk.set_tails(values));
    const wrong = took === undefined ? (Tailvane.desk.refusal().field || "").replace(/^tails\./, "") : "";
    for (const [key, { input }] of fields) {
      if (key === wrong) {
        input.setAttribute("aria-invalid", "true");
        input.closest("details").open = true;
      } else {
        input.removeAttribute("aria-invalid");
      }
    }
    const faulty = fields.get(wrong);
    const name = faulty ? faulty.input.labels[0].textContent : "";
    Tailvane.write(done, took === undefined ? (name ? name + ": refused. " : "") + Tailvane.say.lastError() : "");
    return took !== undefined;
  }

  function frame(reading, desk) {
    const values = desk.tails_fields();
    const key = JSON.stringify(values);
    if (key !== shown) {
      shown = key;
      write(new Map(values));
    }
    showAxes(desk.ion_axes());
  }

  function showAxes(rows) {
    if (axes.children.length !== rows.length) {
      axes.replaceChildren(...rows.map(() => {
        const line = document.createElement("tr");
        const head = document.createElement("th");
        head.scope = "row";
        line.append(head, ...[0, 1, 2].map(() => document.createElement("td")));
        return line;
      }));
    }
    const keys = ["axis_position_angle_deg", "angle_from_antisolar_deg", "aberration_deg"];
    rows.forEach(([wind, ...values], at) => {
      const [head, ...cells] = axes.children[at].children;
      Tailvane.write(head, wind + " km/s");
      cells.forEach((cell, column) => {
        const value = values[column];
        const none = value === null || value === undefined;
        cell.dataset.ion = keys[column];
        cell.dataset.value = none ? "" : String(value);
        Tailvane.write(cell, none ? "none" : value.toFixed(2).replace("-", "\u2212") + "\u00b0");
      });
    });
  }

  function start() {
    const core = Tailvane.core.exports();
    groups.replaceChildren(...core.tails_form().map(build));
    presets.replaceChildren(
      ...core.tails_presets().map((preset) => {
        const button = element("button", "", preset.name);
        button.type = "button";
        button.title = preset.about;
        button.dataset.preset = preset.name;
        button.addEventListener("click", () => use(preset.fields));
        return button;
      })
    );
    Tailvane.desk.onFrame(frame);
    form.addEventListener("change", () => use(typed()));
    form.addEventListener("submit", (event) => {
      event.preventDefault();
      use(typed());
    });
    Tailvane.onAct("reset-tails", () => {
      if (Tailvane.desk.change((desk) => desk.reset_tails()) !== undefined) {
        shown = "";
        Tailvane.write(done, "The laws that come with the page.");
      }
    });
    for (const control of [...layerBoxes, ...layerChoices]) {
      control.addEventListener("change", onLayers);
    }
  }

  return { start, layers, restoreLayers };
})();
