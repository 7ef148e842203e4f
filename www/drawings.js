/*
 * How are the small drawings shown: the orbit view, the map of the dust?
 *
 * The core draws and words them; this script gives each a canvas of its size, and only while its bench is open.
 */
Tailvane.drawings = (function () {
  const drawings = [
    { view: "orbit", words: "orbit-words", draw: "draw_orbit", say: "orbit_words" },
    { view: "map", words: "map-words", draw: "draw_map", say: "map_words" },
  ].map((drawing) => {
    const canvas = Tailvane.find("view", drawing.view);
    return { ...drawing, canvas, context: canvas.getContext("2d", { alpha: false }), twin: document.getElementById(drawing.words) };
  });

  function frame(reading, desk) {
    for (const { canvas, context, twin, draw, say } of drawings) {
      Tailvane.write(twin, desk[say]());
      const { clientWidth: width, clientHeight: height } = canvas;
      if (width < 1 || height < 1) {
        continue;
      }
      const ratio = window.devicePixelRatio || 1;
      const [across, down] = [Math.round(width * ratio), Math.round(height * ratio)];
      if (canvas.width !== across || canvas.height !== down) {
        canvas.width = across;
        canvas.height = down;
      }
      context.setTransform(across / width, 0, 0, down / height, 0, 0);
      desk[draw](context, Tailvane.theme.name(), width, height);
    }
  }

  function start() {
    Tailvane.desk.onFrame(frame);
    const observer = new ResizeObserver(() => Tailvane.desk.redraw());
    for (const { canvas } of drawings) {
      observer.observe(canvas.parentElement);
    }
  }

  return { start };
})();
