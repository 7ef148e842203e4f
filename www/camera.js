/*
 * How is the camera chosen, placed, fitted to the tails and printed?
 *
 * The core holds the camera, finds its frame under the pointer and words everything; this script passes on fields, drags
 * and keys. A drag that takes hold of the frame never reaches the sky plane, which would pan.
 */
Tailvane.camera = (function () {
  const REACH_PX = { mouse: 7, touch: 18, pen: 10 };
  const NUDGE_PX = 20;
  const canvas = Tailvane.find("view", "sky");
  const bench = Tailvane.find("bench", "camera");
  const form = Tailvane.find("form", "camera");
  const fitForm = Tailvane.find("form", "fit");
  const fields = [...document.querySelectorAll("[data-camera]")];
  const choices = [...document.querySelectorAll("[data-fit]")];
  const inUse = Tailvane.find("box", "camera-in-use");
  const kept = Tailvane.find("list", "cameras");
  const words = Tailvane.find("list", "camera-words");
  const hours = Tailvane.find("list", "hours");
  const done = Tailvane.find("show", "camera-done");
  const fitDone = Tailvane.find("show", "fit-done");
  const cardDone = Tailvane.find("show", "card-done");
  const upButton = Tailvane.find("act", "camera-up");
  const card = Tailvane.find("view", "card");
  const cardButton = Tailvane.find("act", "show-card");
  let shown = "";
  let held = null;
  let hasCamera = false;

  const change = (act) => Tailvane.desk.change(act);

  function element(tag, text) {
    const made = document.createElement(tag);
    made.textContent = text;
    return made;
  }

  function frame(reading, desk) {
    hasCamera = desk.has_camera();
    upButton.hidden = !hasCamera;
    upButton.setAttribute("aria-pressed", String(desk.camera_up()));
    if (!card.hidden && !document.documentElement.dataset.print) {
      showCard(desk);
    }
    if (!bench.open) {
      return;
    }
    const found = desk.camera_bench();
    inUse.hidden = !hasCamera;
    const key = JSON.stringify([found.fields, found.kept]);
    if (key !== shown) {
      shown = key;
      showFields(new Map(found.fields || []));
      showKept(found.kept);
    }
    const lines = [...found.standing, ...found.directions].flat();
    if (words.children.length !== lines.length) {
      words.replaceChildren(...lines.map((_, at) => element(at % 2 ? "dd" : "dt", "")));
    }
    lines.forEach((text, at) => Tailvane.write(words.children[at], text));
    Tailvane.write(Tailvane.find("show", "mount"), found.mount);
  }

  /** The night's table costs a dozen skies: only while it can be seen, and when all rests. */
  function rest() {
    if (!hasCamera || !bench.open) {
      return;
    }
    const rows = Tailvane.desk.ask((desk) => desk.camera_hours()) || [];
    hours.replaceChildren(
      ...(rows.length ? rows : [["No hours: the comet is not up, or the mount needs a site."]]).map((row) => {
        const line = document.createElement("tr");
        line.append(...row.map((text) => element("td", text)));
        if (row.length === 1) {
          line.firstChild.colSpan = 5;
        }
        return line;
      })
    );
  }

  function showFields(values) {
    for (const field of fields) {
      field.removeAttribute("aria-invalid");
      if (values.size) {
        field.value = values.get(field.dataset.camera);
      }
    }
  }

  function showKept(names) {
    kept.hidden = names.length === 0;
    kept.replaceChildren(
      ...names.map((name, number) => {
        const item = document.createElement("li");
        const pick = element("button", name);
        pick.type = "button";
        pick.className = "pick";
        pick.addEventListener("click", () => change((desk) => desk.pick_camera(number)));
        const drop = element("button", "Forget");
        drop.type = "button";
        drop.setAttribute("aria-label", "Forget the camera " + name);
        drop.addEventListener("click", () => change((desk) => desk.drop_camera(number)));
        item.append(pick, drop);
        return item;
      })
    );
  }

  function use(event) {
    event.preventDefault();
    const typed = fields.map((field) => [field.dataset.camera, field.value]);
    const took = change((desk) => desk.set_camera(typed));
    const wrong = took === undefined ? (Tailvane.desk.refusal().field || "").replace("camera.", "") : "";
    for (const field of fields) {
      if (field.dataset.camera === wrong) {
        field.setAttribute("aria-invalid", "true");
      } else {
        field.removeAttribute("aria-invalid");
      }
    }
    Tailvane.write(done, took === undefined ? Tailvane.say.lastError() : "In use.");
  }

  function showChoice() {
    const subject = choices[0].value;
    for (const part of fitForm.querySelectorAll("[data-for]")) {
      part.hidden = part.dataset.for !== subject;
    }
  }

  function fit(event) {
    event.preventDefault();
    const choice = choices.map((part) => [part.dataset.fit, part.type === "checkbox" ? (part.checked ? "yes" : "no") : part.value]);
    const said = change((desk) => desk.camera_fit(choice));
    Tailvane.write(fitDone, said === undefined ? Tailvane.say.lastError() : said);
  }

  /* ---- On the sky plane ---- */

  const place = (event) => {
    const area = canvas.getBoundingClientRect();
    return [event.clientX - area.left, event.clientY - area.top];
  };

  function gripAt(event) {
    if (!hasCamera) {
      return "";
    }
    const [x, y] = place(event);
    return Tailvane.desk.ask((desk) => desk.camera_grip(x, y, REACH_PX[event.pointerType] || REACH_PX.mouse)) || "";
  }

  function onDown(event) {
    const grip = event.isPrimary && event.button === 0 ? gripAt(event) : "";
    if (grip) {
      held = { grip, id: event.pointerId, at: place(event) };
      canvas.setPointerCapture(event.pointerId);
      event.stopImmediatePropagation();
    }
  }

  function onMove(event) {
    if (!held || event.pointerId !== held.id) {
      if (event.pointerType === "mouse" && event.buttons === 0) {
        canvas.dataset.grip = gripAt(event);
      }
      return;
    }
    event.stopImmediatePropagation();
    const [x, y] = place(event);
    const [fromX, fromY] = held.at;
    held.at = [x, y];
    change((desk) => (held.grip === "handle" ? desk.camera_turn_toward(x, y) : desk.camera_move(fromX, fromY, x, y)));
  }

  function onUp(event) {
    if (held && event.pointerId === held.id) {
      held = null;
      event.stopImmediatePropagation();
    }
  }

  function onKey(event) {
    if (!hasCamera || event.ctrlKey || event.metaKey || event.altKey) {
      return;
    }
    const move = (right, down) => {
      const [x, y] = [canvas.clientWidth / 2, canvas.clientHeight / 2];
      change((desk) => desk.camera_move(x, y, x + right, y + down));
    };
    const shifted = {
      ArrowLeft: () => move(-NUDGE_PX, 0),
      ArrowRight: () => move(NUDGE_PX, 0),
      ArrowUp: () => move(0, -NUDGE_PX),
      ArrowDown: () => move(0, NUDGE_PX),
    };
    const plain = { "[": () => change((desk) => desk.camera_turn(1)), "]": () => change((desk) => desk.camera_turn(-1)) };
    const act = (event.shiftKey && shifted[event.key]) || plain[event.key];
    if (act) {
      event.preventDefault();
      event.stopImmediatePropagation();
      act();
    }
  }

  /* ---- Field card ---- */

  function showCard(desk, theme) {
    const text = desk.card_svg(theme || Tailvane.theme.name());
    const read = new DOMParser().parseFromString(text, "image/svg+xml").documentElement;
    card.replaceChildren(document.importNode(read, true));
  }

  function toggleCard() {
    card.hidden = !card.hidden;
    cardButton.setAttribute("aria-expanded", String(!card.hidden));
    Tailvane.write(cardButton, card.hidden ? "Show the card" : "Hide the card");
    Tailvane.desk.redraw();
    if (!card.hidden) {
      Tailvane.desk.ask(showCard);
      card.scrollIntoView();
    }
  }

  /** Frames may block printing without a word; then no print begins. */
  function printCard() {
    const root = document.documentElement;
    const wasHidden = card.hidden;
    let began = false;
    const begin = () => {
      began = true;
    };
    const end = () => {
      delete root.dataset.print;
      card.hidden = wasHidden;
      Tailvane.desk.redraw();
    };
    root.dataset.print = "card";
    card.hidden = false;
    Tailvane.desk.ask((desk) => showCard(desk, "paper"));
    window.addEventListener("beforeprint", begin, { once: true });
    window.addEventListener("afterprint", end, { once: true });
    try {
      window.print();
    } catch (refused) {
      began = false;
    }
    // Some browsers print a little later.
    setTimeout(() => {
      if (!began) {
        window.removeEventListener("beforeprint", begin);
        window.removeEventListener("afterprint", end);
        end();
      }
      Tailvane.write(cardDone, began ? "" : "Printing is blocked here. Save the card as SVG and print that.");
    }, 1000);
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    Tailvane.desk.onRest(rest);
    bench.addEventListener("toggle", Tailvane.desk.redraw);
    form.addEventListener("submit", use);
    fitForm.addEventListener("submit", fit);
    choices[0].addEventListener("change", showChoice);
    showChoice();
    Tailvane.onAct("keep-camera", () => {
      const took = change((desk) => desk.keep_camera());
      Tailvane.write(done, took === undefined ? Tailvane.say.lastError() : took ? "Kept in the plan." : "No camera is in use.");
    });
    Tailvane.onAct("remove-camera", () => change((desk) => desk.remove_camera()));
    for (const button of bench.querySelectorAll("[data-turn]")) {
      button.addEventListener("click", () => change((desk) => desk.camera_turn(Number(button.dataset.turn))));
    }
    Tailvane.onAct("camera-up", () => change((desk) => desk.set_camera_up(!desk.camera_up())));
    Tailvane.onAct("show-card", toggleCard);
    Tailvane.onAct("print-card", printCard);
    Tailvane.onAct("save-card", () => {
      const svg = Tailvane.desk.ask((desk) => desk.card_svg("paper"));
      if (svg) {
        Tailvane.save("field-card.svg", "image/svg+xml", svg);
        Tailvane.write(cardDone, "Saved as field-card.svg.");
      }
    });
    for (const [kind, listener] of [["pointerdown", onDown], ["pointermove", onMove], ["pointerup", onUp], ["pointercancel", onUp], ["keydown", onKey]]) {
      canvas.addEventListener(kind, listener, { capture: true });
    }
  }

  return { start };
})();
