/*
 * How is the sky plane shown and handled?
 *
 * The core draws; this script gives it a canvas of the right size and passes on wheel, pinch, drag, keys and pointer.
 */
Tailvane.sky = (function () {
  const ZOOM_STEP = 1.25;
  const PAN_STEP_PX = 40;
  const PRINT_SCALE = 4;
  const STILL_MS = 140;
  const WITHOUT_DUST = { syndynes: false, synchrones: false, neck_line: false, toward_sun: false, dust: false, isophotes: false };
  const canvas = Tailvane.find("view", "sky");
  const box = Tailvane.find("box", "sky");
  const hover = Tailvane.find("show", "hover");
  const upButton = Tailvane.find("act", "up");
  const context = canvas.getContext("2d", { alpha: false });
  const pointers = new Map();
  let size = null;
  let hoverAt = null;
  let stillTimer = 0;

  /** Measures the box: CSS pixels for the drawing, device pixels for the canvas. */
  function watchSize() {
    const observer = new ResizeObserver((entries) => {
      const entry = entries[entries.length - 1];
      const width = entry.contentRect.width;
      const height = entry.contentRect.height;
      if (width < 1 || height < 1) {
        return;
      }
      const exact = entry.devicePixelContentBoxSize && entry.devicePixelContentBoxSize[0];
      resize(width, height, exact ? exact.inlineSize / width : window.devicePixelRatio || 1);
    });
    try {
      observer.observe(box, { box: "device-pixel-content-box" });
    } catch (unknown) {
      observer.observe(box);
    }
  }

  function resize(width, height, ratio) {
    if (width !== size.width || height !== size.height || ratio !== size.ratio) {
      size = { width, height, ratio };
      Tailvane.desk.redraw();
    }
  }

  function firstSize() {
    const width = box.clientWidth;
    const height = box.clientHeight;
    size = { width: Math.max(width, 1), height: Math.max(height, 1), ratio: window.devicePixelRatio || 1 };
  }

  /** The first picture of all: the directions without the dust, which takes longer. */
  function drawDirections() {
    firstSize();
    Tailvane.desk.ask((desk) => paint(desk, size.ratio, false, { ...Tailvane.tails.layers(), ...WITHOUT_DUST }));
    canvas.dataset.picture = "directions";
  }

  /** Draws the layers; in motion the dust is made coarser and sooner. */
  function paint(desk, scale, still, layers = Tailvane.tails.layers()) {
    const width = Math.max(1, Math.round(size.width * scale));
    const height = Math.max(1, Math.round(size.height * scale));
    if (canvas.width !== width || canvas.height !== height) {
      canvas.width = width;
      canvas.height = height;
    }
    context.setTransform(1, 0, 0, 1, 0, 0);
    desk.resize(size.width, size.height);
    desk.set_layers(layers);
    desk.set_still(still, scale);
    context.setTransform(width / size.width, 0, 0, height / size.height, 0, 0);
    desk.draw(context, Tailvane.theme.name());
  }

  function frame(reading, desk) {
    paint(desk, size.ratio, false);
    canvas.dataset.picture = "coarse";
    clearTimeout(stillTimer);
    stillTimer = setTimeout(refine, STILL_MS);
    upButton.hidden = !reading.at_site;
    upButton.setAttribute("aria-pressed", String(desk.zenith_up()));
    showHover(desk);
  }

  /** Nothing changed for a moment: the finer picture, once. */
  function refine() {
    Tailvane.desk.ask((desk) => paint(desk, size.ratio, true));
    canvas.dataset.picture = "fine";
  }

  function drawForPrint() {
    clearTimeout(stillTimer);
    Tailvane.desk.ask((desk) => paint(desk, PRINT_SCALE, true));
  }

  function showHover(desk) {
    const words = hoverAt ? desk.hover(hoverAt[0], hoverAt[1]) : undefined;
    hover.hidden = !words;
    if (words) {
      Tailvane.write(hover, words);
      placeHover();
    }
  }

  /** Beside the pointer, on the side that has room. */
  function placeHover() {
    const gap = 14;
    const [x, y] = hoverAt;
    const right = x + gap + hover.offsetWidth <= size.width;
    const below = y + gap + hover.offsetHeight <= size.height;
    const left = right ? x + gap : Math.max(0, x - gap - hover.offsetWidth);
    const top = below ? y + gap : Math.max(0, y - gap - hover.offsetHeight);
    hover.style.transform = "translate(" + Math.round(left) + "px, " + Math.round(top) + "px)";
  }

  function place(event) {
    const area = canvas.getBoundingClientRect();
    return [event.clientX - area.left, event.clientY - area.top];
  }

  function middle() {
    return [size.width / 2, size.height / 2];
  }

  const zoom = (factor, about) => Tailvane.desk.change((desk) => desk.zoom(factor, about[0], about[1]));
  const pan = (right, down) => Tailvane.desk.change((desk) => desk.pan(right, down));
  const reset = () => Tailvane.desk.change((desk) => desk.reset_view());

  function onWheel(event) {
    event.preventDefault();
    // Browsers disagree about the size of one notch, so only lines and pixels are told apart.
    const notches = event.deltaMode === 0 ? event.deltaY / 100 : event.deltaY / 3;
    const step = Math.max(-2, Math.min(2, notches * (event.ctrlKey ? 3 : 1)));
    zoom(Math.pow(ZOOM_STEP, -step), place(event));
  }

  function onPointerMove(event) {
    const now = place(event);
    const before = pointers.get(event.pointerId);
    if (!before) {
      hoverAt = now;
      Tailvane.desk.redraw();
      return;
    }
    const others = [...pointers].filter(([id]) => id !== event.pointerId).map(([, at]) => at);
    pointers.set(event.pointerId, now);
    hoverAt = now;
    if (others.length === 0) {
      pan(now[0] - before[0], now[1] - before[1]);
      return;
    }
    // Two fingers: zoom about the finger that stays by the change of their distance.
    const still = others[0];
    const distance = (at) => Math.hypot(at[0] - still[0], at[1] - still[1]);
    if (distance(before) > 10 && distance(now) > 10) {
      zoom(distance(now) / distance(before), still);
    }
  }

  function onKey(event) {
    if (event.ctrlKey || event.metaKey || event.altKey) {
      return;
    }
    const acts = {
      "+": () => zoom(ZOOM_STEP, middle()),
      "=": () => zoom(ZOOM_STEP, middle()),
      "-": () => zoom(1 / ZOOM_STEP, middle()),
      "0": reset,
      ArrowLeft: () => pan(PAN_STEP_PX, 0),
      ArrowRight: () => pan(-PAN_STEP_PX, 0),
      ArrowUp: () => pan(0, PAN_STEP_PX),
      ArrowDown: () => pan(0, -PAN_STEP_PX),
    };
    if (acts[event.key]) {
      event.preventDefault();
      acts[event.key]();
    }
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    watchSize();
    canvas.addEventListener("wheel", onWheel, { passive: false });
    canvas.addEventListener("pointerdown", (event) => {
      pointers.set(event.pointerId, place(event));
      canvas.setPointerCapture(event.pointerId);
      hoverAt = place(event);
      Tailvane.desk.redraw();
    });
    canvas.addEventListener("pointermove", onPointerMove);
    for (const end of ["pointerup", "pointercancel"]) {
      canvas.addEventListener(end, (event) => pointers.delete(event.pointerId));
    }
    canvas.addEventListener("pointerleave", (event) => {
      // A tap leaves at once; its read-out stays until the next one.
      if (event.pointerType === "mouse" && pointers.size === 0) {
        hoverAt = null;
        Tailvane.desk.redraw();
      }
    });
    canvas.addEventListener("dblclick", reset);
    canvas.addEventListener("keydown", onKey);
    Tailvane.onAct("zoom-in", () => zoom(ZOOM_STEP, middle()));
    Tailvane.onAct("zoom-out", () => zoom(1 / ZOOM_STEP, middle()));
    Tailvane.onAct("zoom-reset", reset);
    Tailvane.onAct("up", () => Tailvane.desk.change((desk) => desk.set_zenith_up(!desk.zenith_up())));
  }

  return { start, drawDirections, drawForPrint, refine };
})();
