/*
 * How is time chosen on the ribbon: slider, pointer, wheel, fingers, keys, buttons, play?
 *
 * The core draws the ribbon on one canvas, only when it changed, and the handle on another above it; a real slider lies
 * over the track. Events and windows are searched for when the page has time, a few milliseconds at once.
 * Typed dates are clock.js, curves, range and tables are almanac.js.
 */
Tailvane.season = (function () {
  const HOUR = 1 / 24;
  const ZOOM_STEP = 1.3;
  const ORDINARY_PX = 15;
  const SLICE_MS = 8;
  const SAY_AFTER_MS = 400;
  const slider = Tailvane.find("control", "season");
  const box = Tailvane.find("box", "track");
  const canvas = Tailvane.find("view", "season");
  const context = canvas.getContext("2d", { alpha: false });
  const over = Tailvane.find("layer-of", "season");
  const overContext = over.getContext("2d");
  const under = Tailvane.find("show", "season-under");
  const words = document.getElementById("season-words");
  const progress = Tailvane.find("show", "season-progress");
  const stop = Tailvane.find("act", "season-stop");
  const whole = Tailvane.find("act", "season-whole");
  const fingers = new Map();
  const listeners = [];
  let season = null;
  let drawn = "";
  let drawnOf = null;
  let size = { width: 0, height: 0, zoom: 1 };
  let pointer = NaN;
  let working = false;
  let stopped = false;
  let sliceDays = 20;
  let workSince = 0;

  const act = (change) => Tailvane.desk.change(change);
  const step = (days) => act((desk) => desk.season_step(days));
  const toEvent = (sense) => act((desk) => desk.season_to_event(sense));
  const zoomNow = (factor) => act((desk) => desk.season_zoom_now(factor));

  function frame(reading, desk) {
    slider.setAttribute("aria-valuetext", reading.time_words);
    paint(desk);
    slider.max = String(season.steps);
    slider.value = String(season.step);
    if (season.done < 1 && !stopped) {
      work();
    }
  }

  /** Draws what changed. Lengths of the core are in pixels of ordinary text, so that enlarged text enlarges the ribbon. */
  function paint(desk) {
    const zoom = parseFloat(getComputedStyle(document.documentElement).fontSize) / ORDINARY_PX;
    const width = Math.max(box.clientWidth, 100) / zoom;
    const low = matchMedia("(min-width: 60em) and (min-height: 38em)").matches;
    season = desk.season(width, low ? Math.max(150, (0.24 * innerHeight) / zoom) : 1e4, Tailvane.almanac.curves());
    const ratio = window.devicePixelRatio || 1;
    const version = [season.version, Tailvane.theme.name(), ratio, zoom].join();
    if (version !== drawn || desk !== drawnOf) {
      [drawn, drawnOf] = [version, desk];
      size = { width, height: season.height_px, zoom };
      const [left, right, top, bottom] = season.track_px;
      box.style.height = season.height_px * zoom + "px";
      // Half a thumb on each side, so that the thumb's middle runs from end to end.
      slider.style.left = left * zoom - 8 + "px";
      slider.style.width = (right - left) * zoom + 16 + "px";
      slider.style.top = top * zoom + "px";
      slider.style.height = (bottom - top) * zoom + "px";
      fit(canvas, context, ratio);
      fit(over, overContext, ratio);
      desk.draw_season(context, Tailvane.theme.name());
      Tailvane.write(words, season.sentence);
      whole.hidden = season.whole;
      listeners.forEach((listener) => listener(desk, season));
    }
    paintHandle(desk);
    showProgress();
  }

  function fit(surface, drawing, ratio) {
    const [across, down] = [size.width, size.height].map((length) => Math.round(length * size.zoom * ratio));
    if (surface.width !== across || surface.height !== down) {
      surface.width = across;
      surface.height = down;
    }
    drawing.setTransform(across / size.width, 0, 0, down / size.height, 0, 0);
  }

  function paintHandle(desk) {
    overContext.clearRect(0, 0, size.width, size.height);
    desk.draw_season_handle(overContext, Tailvane.theme.name(), pointer);
    const found = Number.isNaN(pointer) ? "" : desk.season_under(pointer) || "";
    Tailvane.write(under, found);
    under.hidden = !found;
  }

  const repaint = () => Tailvane.desk.ask(paint);

  /** Searches on while the page is idle; each slice ends soon enough for the next frame. */
  function work() {
    if (working) {
      return;
    }
    working = true;
    workSince = workSince || performance.now();
    const later = window.requestIdleCallback ? (then) => requestIdleCallback(then, { timeout: 100 }) : (then) => setTimeout(then, 5);
    later(() => {
      working = false;
      const from = performance.now();
      let done = season.done;
      while (done < 1 && performance.now() - from < SLICE_MS) {
        const began = performance.now();
        done = Tailvane.desk.ask((desk) => desk.season_advance(sliceDays));
        if (done === undefined) {
          return;
        }
        const took = performance.now() - began;
        sliceDays = Math.max(1, Math.min(400, sliceDays * (took < SLICE_MS / 4 ? 2 : took > SLICE_MS / 2 ? 0.5 : 1)));
      }
      repaint();
      if (season.done >= 1) {
        workSince = 0;
      } else if (!stopped) {
        work();
      }
    });
  }

  function showProgress() {
    const long = workSince && performance.now() - workSince > SAY_AFTER_MS;
    const busy = season.done < 1 && (long || stopped);
    stop.hidden = !busy;
    Tailvane.write(stop, stopped ? "Search on" : "Stop");
    const outside = season.outside ? "The chosen time lies outside this range." : "";
    Tailvane.write(progress, !busy ? outside : stopped ? "Search stopped: events and windows are not complete." : "Searching the season: " + Math.floor(season.done * 100) + " %");
  }

  /** Where on the drawing a pointer is, in the core's pixels. */
  const place = (event) => (event.clientX - box.getBoundingClientRect().left) / size.zoom;

  function onKey(event) {
    if (event.ctrlKey || event.metaKey || event.altKey) {
      return;
    }
    const by = event.shiftKey ? 1 : HOUR;
    const acts = {
      ArrowRight: () => step(by),
      ArrowUp: () => step(by),
      ArrowLeft: () => step(-by),
      ArrowDown: () => step(-by),
      PageUp: () => toEvent(1),
      PageDown: () => toEvent(-1),
      Home: () => step(-1e9),
      End: () => step(1e9),
      "+": () => zoomNow(2),
      "=": () => zoomNow(2),
      "-": () => zoomNow(0.5),
      0: () => zoomNow(1e-9),
    };
    if (acts[event.key]) {
      event.preventDefault();
      acts[event.key]();
    }
  }

  function onWheel(event) {
    event.preventDefault();
    const notches = event.deltaMode === 0 ? 1 / 100 : 1 / 3;
    const [along, across] = event.shiftKey ? [event.deltaY, 0] : [event.deltaX, event.deltaY];
    if (Math.abs(along) > Math.abs(across)) {
      act((desk) => desk.season_pan(along * notches * 0.1));
      return;
    }
    const steps = Math.max(-2, Math.min(2, across * notches * (event.ctrlKey ? 3 : 1)));
    const about = place(event);
    act((desk) => desk.season_zoom(Math.pow(ZOOM_STEP, -steps), about));
  }

  function onMove(event) {
    const at = place(event);
    const before = fingers.get(event.pointerId);
    if (fingers.size === 2 && before !== undefined) {
      // Two fingers zoom about the one that stays.
      const still = [...fingers].find(([id]) => id !== event.pointerId)[1];
      fingers.set(event.pointerId, at);
      const [was, is] = [Math.abs(before - still), Math.abs(at - still)];
      if (was > 10 && is > 10) {
        act((desk) => desk.season_zoom(is / was, still));
      }
      return;
    }
    if (before !== undefined) {
      fingers.set(event.pointerId, at);
    }
    pointer = at;
    Tailvane.desk.ask(paintHandle);
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    slider.addEventListener("input", () => {
      // The fingers of a pinch are no wish for a time.
      if (fingers.size < 2) {
        act((desk) => desk.season_scrub(Number(slider.value) / Number(slider.max)));
      }
    });
    slider.addEventListener("keydown", onKey);
    box.addEventListener("wheel", onWheel, { passive: false });
    box.addEventListener("pointerdown", (event) => fingers.set(event.pointerId, place(event)));
    box.addEventListener("pointermove", onMove);
    for (const end of ["pointerup", "pointercancel"]) {
      window.addEventListener(end, (event) => fingers.delete(event.pointerId));
    }
    box.addEventListener("pointerleave", () => {
      pointer = NaN;
      Tailvane.desk.ask(paintHandle);
    });
    new ResizeObserver(() => season && Tailvane.desk.redraw()).observe(box);
    for (const button of document.querySelectorAll("[data-step-hours]")) {
      button.addEventListener("click", () => step(Number(button.dataset.stepHours) * HOUR));
    }
    Tailvane.onAct("event-before", () => toEvent(-1));
    Tailvane.onAct("event-after", () => toEvent(1));
    Tailvane.onAct("season-in", () => zoomNow(2));
    Tailvane.onAct("season-out", () => zoomNow(0.5));
    Tailvane.onAct("season-whole", () => zoomNow(1e-9));
    Tailvane.onAct("season-stop", () => {
      stopped = !stopped;
      repaint();
      work();
    });
  }

  return {
    start,
    step,
    pause: () => Tailvane.clock.pause(),
    /** Another season: what was stopped begins anew. */
    anew: () => {
      stopped = false;
    },
    atEnd: () => Number(slider.value) >= Number(slider.max) && season.whole,
    onDrawn: (listener) => listeners.push(listener),
  };
})();
