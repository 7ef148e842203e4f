/*
 * What is on the desk, and when is it drawn again?
 *
 * Holds the one `Desk` of the core (plan, time, view). Everything that changes it goes through `change`; at most one
 * redraw happens per animation frame. Listeners hear each frame's reading; `onRest` listeners hear it when
 * nothing has changed for a moment (speech, link, storage).
 */
Tailvane.desk = (function () {
  const REST_MS = 500;
  /** In motion the tails are summed no more often than this. */
  const SUMS_MS = 50;
  const frameListeners = [];
  const restListeners = [];
  let desk = null;
  let lastPlan = null;
  let asked = false;
  let hidden = false;
  let restTimer = 0;
  let moved = false;
  let summedAt = -SUMS_MS;
  let refused = {};

  /** Puts a plan on a new desk; draws nothing yet. */
  function start(plan) {
    desk = new (Tailvane.core.exports().Desk)(plan);
    lastPlan = plan;
  }

  /**
   * Runs `act(desk)` and redraws. A refusal of the core is shown and changes nothing; a panic costs the core, which
   * is replaced with the last good plan. Returns what `act` returned, or undefined after a failure.
   */
  function change(act) {
    try {
      const result = act(desk);
      Tailvane.say.clearError();
      redraw();
      return result;
    } catch (failure) {
      fail(failure);
      return undefined;
    }
  }

  /** Asks the core without changing anything; failures are shown as in `change`. */
  function ask(act) {
    try {
      return act(desk);
    } catch (failure) {
      fail(failure);
      return undefined;
    }
  }

  function fail(failure) {
    refused = {};
    if (failure && typeof failure.message === "string" && failure.refused) {
      refused = failure;
      Tailvane.say.error(failure.message);
      return;
    }
    const words = Tailvane.core.lastWords() || String((failure && failure.message) || failure);
    Tailvane.say.error("Something in the page failed and was started anew from the last good plan: " + words);
    try {
      Tailvane.core.fresh();
      start(lastPlan);
      redraw();
    } catch (again) {
      Tailvane.say.error("The page failed and could not start anew: " + words + ". Reload it.");
    }
  }

  /** Draws nothing while out of sight, and once when back. */
  function setSeen(seen) {
    hidden = !seen;
    if (seen) {
      redraw();
    }
  }

  function redraw() {
    moved = true;
    askFrame();
  }

  function askFrame() {
    if (!asked && !hidden) {
      asked = true;
      requestAnimationFrame(frame);
    }
  }

  /**
   * Shows what changed. In motion some frames are hasty: they tell of tails that were summed a moment before. A hasty frame
   * is followed by another, so that the last one of a motion has its own sums.
   */
  function frame(time) {
    const hasty = moved && time - summedAt < SUMS_MS;
    [asked, moved] = [false, false];
    summedAt = hasty ? summedAt : time;
    let reading;
    try {
      desk.set_hasty(hasty);
      reading = desk.reading();
      for (const listener of frameListeners) {
        listener(reading, desk);
      }
      desk.set_hasty(false);
    } catch (failure) {
      fail(failure);
      return;
    }
    if (hasty) {
      askFrame();
    }
    clearTimeout(restTimer);
    restTimer = setTimeout(rest, REST_MS, reading);
  }

  function rest(reading) {
    if (asked) {
      return;
    }
    lastPlan = ask((d) => d.plan_json()) || lastPlan;
    for (const listener of restListeners) {
      listener(reading, lastPlan);
    }
  }

  return {
    start,
    change,
    ask,
    redraw,
    setSeen,
    refusal: () => refused,
    onFrame: (listener) => frameListeners.push(listener),
    onRest: (listener) => restListeners.push(listener),
  };
})();

/** The element that carries a hook such as `data-show="comet"`. */
Tailvane.find = (hook, name) => document.querySelector("[data-" + hook + '="' + name + '"]');

/** Runs `then` when the button of this act is pressed. */
Tailvane.onAct = (name, then) => Tailvane.find("act", name).addEventListener("click", then);

/** Writes text only where it differs, so that nothing is laid out or read aloud again in vain. */
Tailvane.write = (element, text) => {
  if (element.textContent !== text) {
    element.textContent = text;
  }
};

/** Offers `text` as a file to save. */
Tailvane.save = (name, type, text) => {
  const address = URL.createObjectURL(new Blob([text], { type }));
  const link = document.createElement("a");
  link.href = address;
  link.download = name;
  document.body.append(link);
  link.click();
  link.remove();
  setTimeout(() => URL.revokeObjectURL(address), 10000);
};
