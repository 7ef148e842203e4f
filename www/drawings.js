/*
 * How are the small drawings shown: the orbit view, the map of the dust?
 *
 * The core draws and words them; this script gives each a canvas of its size. Behind a closed bench nothing is drawn or
 * worded.
 */
Tailvane.drawings = (function () {
  const drawings = [
    { view: "orbit", words: "orbit-words", draw: "draw_orbit", say: "orbit_words" },
    { view: "map", words: "map-words", draw: "draw_map", say: "map_words" },
  ].map((drawing) => {
    const canvas = Tailvane.find("view", drawing.view);
    const context = canvas.getContext("2d", { alpha: false });
    return { ...drawing, canvas, context, twin: document.getElementById(drawing.words), bench: canvas.closest("details"), size: null };
  });

  function frame(reading, desk) {
    for (const { canvas, context, twin, bench, size, draw, say } of drawings) {
      if (!bench.open || !size) {
        continue;
      }
      Tailvane.write(twin, desk[say]());
      fit(canvas, context, size);
      desk[draw](context, Tailvane.theme.name(), size.width, size.height);
    }
  }

  /** Gives a canvas the pixels of its size on this screen, and its context the scale of the page. */
  function fit(canvas, context, { width, height }) {
    const ratio = window.devicePixelRatio || 1;
    const [across, down] = [Math.round(width * ratio), Math.round(height * ratio)];
    if (canvas.width !== across || canvas.height !== down) {
      canvas.width = across;
      canvas.height = down;
    }
    context.setTransform(across / width, 0, 0, down / height, 0, 0);
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    // Sizes are watched and not asked for: asking in the middle of a frame lays the page out once more.
    for (const drawing of drawings) {
      new ResizeObserver((entries) => {
        const { width, height } = entries[entries.length - 1].contentRect;
        drawing.size = width < 1 || height < 1 ? null : { width, height };
        if (drawing.bench.open) {
          Tailvane.desk.redraw();
        }
      }).observe(drawing.canvas);
      drawing.bench.addEventListener("toggle", Tailvane.desk.redraw);
    }
  }

  return { start, fit };
})();
