/*
 * How is time typed, and how does it play?
 */
Tailvane.clock = (function () {
  const HOUR = 1 / 24;
  const typed = Tailvane.find("input", "time");
  const playButton = Tailvane.find("act", "play");
  const rate = Tailvane.find("control", "rate");
  let playing = false;
  let playedAt = 0;
  let now = 0;

  function frame(reading) {
    now = reading.tdb_days;
    if ((document.activeElement !== typed || !typed.dataset.changed) && typed.value !== reading.time_iso) {
      typed.value = reading.time_iso;
    }
    Tailvane.write(Tailvane.find("show", "decimal-day"), reading.time_decimal);
  }

  function setPlaying(on) {
    playing = on;
    playButton.setAttribute("aria-pressed", String(on));
    Tailvane.write(playButton, on ? "Pause" : "Play");
    if (on) {
      if (Tailvane.season.atEnd()) {
        Tailvane.season.step(-1e9);
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
      // At the end of the season a step leads nowhere.
      if (!(Tailvane.season.step(due * Number(rate.value) * HOUR) > now)) {
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
    playButton.addEventListener("click", () => setPlaying(!playing));
  }

  return { start, pause: () => setPlaying(false) };
})();
