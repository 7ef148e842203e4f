/*
 * In which order does the page come to life?
 *
 * The first picture comes first: an invented comet, or the plan in the address. A bad plan in the address is said, and the
 * invented comet is shown.
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
  for (const part of ["sky", "almanac", "season", "clock", "say", "numbers", "tails", "drawings", "comet", "observer", "plan", "night", "board"]) {
    Tailvane[part].start();
  }
  const invented = Tailvane.core.exports().examples()[0].plan;
  let refusal = null;
  try {
    Tailvane.desk.start(Tailvane.plan.fromAddress() || invented);
  } catch (failure) {
    refusal = failure;
    Tailvane.desk.start(invented);
  }
  if (refusal) {
    Tailvane.say.error(refusal.message + ". An invented comet is shown instead.");
  }
  starting.remove();
  document.documentElement.dataset.ready = "yes";
})();
