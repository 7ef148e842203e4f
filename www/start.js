/*
 * In which order does the page come to life?
 *
 * The first picture comes first: the plan in the address, what this tab kept, or an invented comet. In a frame of another
 * page only the few parts of the compact page start.
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
  const everything = ["sky", "season", "say", "numbers", "tails", "drawings", "comet", "observer", "plan", "share", "walk", "explain", "undo", "keep"];
  for (const part of Tailvane.embed.on() ? Tailvane.embed.PARTS : everything) {
    Tailvane[part].start();
  }
  await Tailvane.plan.open(Tailvane.core.exports().examples()[0].plan);
  starting.remove();
  document.documentElement.dataset.ready = "yes";
})();
