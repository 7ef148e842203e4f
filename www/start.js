/*
 * In which order does the page come to life?
 *
 * The first picture comes first, the directions alone: the plan in the address, what this tab kept, or an invented comet.
 * Dust, words and benches follow with the next frame. A bad plan in the address is said. In a frame of another page
 * only the few parts of the compact page start.
 */
(async function () {
  const EVERYTHING = [
    "sky", "almanac", "season", "clock", "say", "numbers", "tails", "drawings", "camera", "comet", "observer",
    "plan", "night", "board", "share", "walk", "explain", "undo", "keep",
  ];
  const starting = Tailvane.find("show", "starting");
  try {
    await Tailvane.core.load();
  } catch (failure) {
    starting.textContent = failure.message;
    return;
  }
  Tailvane.theme.start();
  const found = await Tailvane.plan.open(Tailvane.core.exports().examples()[0].plan);
  starting.remove();
  Tailvane.sky.drawDirections();
  await shown();
  for (const part of Tailvane.embed.on() ? Tailvane.embed.PARTS : EVERYTHING) {
    Tailvane[part].start();
  }
  Tailvane.plan.tell(found);
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
