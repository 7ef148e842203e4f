/*
 * How is time chosen: slider, keys, buttons, typed date, play?
 *
 * The slider counts whole hours from the start of the season; the time itself is the core's and may lie between.
 */
Tailvane.season = (function () {
  const HOUR = 1 / 24;
  const EVENT_STEP_DAYS = 10;
  const slider = Tailvane.find("control", "season");
  const typed = Tailvane.find("input", "time");
  const months = Tailvane.find("control", "months");
  const playButton = Tailvane.find("act", "play");
  const rate = Tailvane.find("control", "rate");
  const ticks = Tailvane.find("list", "ticks");
  const marks = Tailvane.find("list", "marks");
  const track = Tailvane.find("box", "track");
  let season = null;
  let drawn = "";
  let now = 0;
  let playing = false;
  let playedAt = 0;

  const scrub = (days) => {
    // Within one frame several steps may come; each builds on the last, not on the last one drawn.
    const kept = Math.max(season.from_days, Math.min(season.to_days, days));
    const took = Tailvane.desk.change((desk) => desk.scrub(kept));
    if (took !== undefined) {
      now = took;
    }
  };

  function frame(reading, desk) {
    now = reading.tdb_days;
    season = desk.season(Number(months.value), trackRoom());
    slider.max = String(Math.round((season.to_days - season.from_days) * 24));
    slider.value = String(Math.round((now - season.from_days) * 24));
    slider.setAttribute("aria-valuetext", reading.time_words);
    if (document.activeElement !== typed || !typed.dataset.changed) {
      if (typed.value !== reading.time_iso) {
        typed.value = reading.time_iso;
      }
    }
    Tailvane.write(Tailvane.find("show", "decimal-day"), reading.time_decimal);
    drawTrack();
  }

  /** Width of the track in pixels of ordinary text, so that enlarged labels get the room they need. */
  function trackRoom() {
    const ordinary = 15;
    return (Math.max(track.clientWidth, 100) * ordinary) / parseFloat(getComputedStyle(document.documentElement).fontSize);
  }

  function drawTrack() {
    const key = JSON.stringify(season);
    if (key === drawn) {
      return;
    }
    drawn = key;
    ticks.replaceChildren(...season.ticks.map((tick) => mark(tick, tick.words ? "tick named" : "tick")));
    marks.replaceChildren(...season.events.map((event) => mark(event, "event")));
  }

  function mark(at, look) {
    const element = document.createElement("span");
    element.className = look;
    element.style.left = at.percent + "%";
    if (at.words) {
      const words = document.createElement("span");
      words.className = "tick-words";
      words.textContent = at.words;
      element.append(words);
    }
    return element;
  }

  function onKey(event) {
    if (event.ctrlKey || event.metaKey || event.altKey) {
      return;
    }
    const step = event.shiftKey ? 1 : HOUR;
    const acts = {
      ArrowRight: () => scrub(now + step),
      ArrowUp: () => scrub(now + step),
      ArrowLeft: () => scrub(now - step),
      ArrowDown: () => scrub(now - step),
      PageUp: () => scrub(nextEvent(1)),
      PageDown: () => scrub(nextEvent(-1)),
      Home: () => scrub(season.from_days),
      End: () => scrub(season.to_days),
    };
    if (acts[event.key]) {
      event.preventDefault();
      acts[event.key]();
    }
  }

  /** Ten days on, or the nearest event before that. */
  function nextEvent(sense) {
    const second = 1 / 86400;
    const target = now + sense * EVENT_STEP_DAYS;
    const between = season.events
      .map((event) => event.days)
      .filter((days) => (days - now) * sense > second && (target - days) * sense > 0)
      .sort((a, b) => (a - b) * sense);
    return between.length ? between[0] : target;
  }

  function setPlaying(on) {
    playing = on;
    playButton.setAttribute("aria-pressed", String(on));
    Tailvane.write(playButton, on ? "Pause" : "Play");
    if (on) {
      if (now >= season.to_days - HOUR) {
        scrub(season.from_days);
      }
      playedAt = performance.now();
      requestAnimationFrame(ride);
    }
  }

  function ride(time) {
    if (!playing) {
      return;
    }
    // Whoever asked for reduced motion gets one still picture a second.
    const still = matchMedia("(prefers-reduced-motion: reduce)").matches;
    const seconds = Math.max(0, (time - playedAt) / 1000);
    const due = still ? Math.floor(seconds) : Math.min(seconds, 0.25);
    if (due > 0 && due * Number(rate.value) * 3600 >= 1) {
      playedAt = still ? playedAt + due * 1000 : time;
      scrub(now + due * Number(rate.value) * HOUR);
      if (now >= season.to_days - 1e-6) {
        setPlaying(false);
        return;
      }
    }
    requestAnimationFrame(ride);
  }

  function takeTyped() {
    if (!typed.dataset.changed) {
      return;
    }
    const took = Tailvane.desk.change((desk) => desk.scrub_to_text(typed.value));
    typed.setAttribute("aria-invalid", String(took === undefined));
    if (took !== undefined) {
      delete typed.dataset.changed;
      setPlaying(false);
    }
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    slider.addEventListener("input", () => scrub(season.from_days + Number(slider.value) * HOUR));
    slider.addEventListener("keydown", onKey);
    months.addEventListener("change", Tailvane.desk.redraw);
    typed.addEventListener("input", () => {
      typed.dataset.changed = "yes";
    });
    typed.addEventListener("change", takeTyped);
    typed.addEventListener("keydown", (event) => {
      if (event.key === "Escape") {
        delete typed.dataset.changed;
        typed.removeAttribute("aria-invalid");
        Tailvane.say.clearError();
        Tailvane.desk.redraw();
      }
    });
    Tailvane.find("form", "time").addEventListener("submit", (event) => {
      event.preventDefault();
      takeTyped();
    });
    for (const button of document.querySelectorAll("[data-step-hours]")) {
      button.addEventListener("click", () => scrub(now + Number(button.dataset.stepHours) * HOUR));
    }
    playButton.addEventListener("click", () => setPlaying(!playing));
  }

  return { start, pause: () => setPlaying(false) };
})();
