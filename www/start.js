/*
 * In which order does the page come to life?
 *
 * The first picture comes first, the directions alone: an invented comet, or the plan in the address. Dust, words and
 * benches follow with the next frame. A bad plan in the address is said, and the invented comet is shown.
 */
(async function () {
  const starting = Tailvane.find("show", "starting");
  try {
    await Tailvane.core.load();
  } catch (failure) {
    starting.textContent = failure.message;
    return;
  }
  Tailvane.theme.start();
  const invented = Tailvane.core.exports().examples()[0].plan;
  let refusal = null;
  try {
    Tailvane.desk.start(Tailvane.plan.fromAddress() || invented);
  } catch (failure) {
    refusal = failure;
    Tailvane.desk.start(invented);
  }
  starting.remove();
  Tailvane.sky.drawDirections();
  await shown();
  for (const part of ["sky", "almanac", "season", "clock", "say", "numbers", "tails", "drawings", "camera", "comet", "observer", "plan", "night", "board"]) {
    Tailvane[part].start();
  }
  if (refusal) {
    Tailvane.say.error(refusal.message + ". An invented comet is shown instead.");
  }
  Tailvane.desk.redraw();
  document.documentElement.dataset.ready = "yes";

  /** Waits until what was drawn is on the screen; a page that nobody sees has no frames and does not wait for one. */
  function shown() {
    return new Promise((done) => {
      requestAnimationFrame(() => setTimeout(done));
      setTimeout(done, 100);
    });
  }
})();
