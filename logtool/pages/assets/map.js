// Starts the page: one object holds what is chosen, what that leaves, and the layer that shows it.
logtoolMap.start = (map) => {
  const { geo, ramp, model: { read }, choice, layer: { Layer }, panel, controls } = logtoolMap;
  const FEW = 300; // paths to all senders are drawn from the start up to this many
  const SNR_STEP_DB = 5;
  const FIT = { padding: L.point(12, 12), maxZoom: 5 };
  const MARGIN_DEG = 30; // how far one may drag past the edge of the world

  const root = document.documentElement;
  const json = (id) => JSON.parse(document.getElementById(id).textContent);
  const model = read(json("logtool-map-data"));
  let framed = null; // the middle meridian of the world that the map was last fitted to
  const dark = window.matchMedia("(prefers-color-scheme: dark)");

  function scales() {
    const farthest = model.pairs.reduce((most, { km }) => Math.max(most, km || 0), 0);
    let low = Infinity, high = -Infinity;
    for (const value of model.counts.snr) {
      if (value === null) continue;
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
    if (low > high) [low, high] = [-SNR_STEP_DB, SNR_STEP_DB];
    return {
      km: { low: 0, high: ramp.roundUp(farthest), unit: "km" },
      snr: {
        low: SNR_STEP_DB * Math.floor(low / SNR_STEP_DB), high: SNR_STEP_DB * (Math.floor(high / SNR_STEP_DB) + 1), unit: "dB",
      },
    };
  }

  // The colours of the style sheet, by their names in the script: --grid-text is gridText.
  function ink() {
    const style = getComputedStyle(root), names = "sea land coast grid grid-text night dusk ring ring-text reach path chosen "
      + "halo edge none none-edge receiver cell rest text bar bar-now";
    return Object.fromEntries(names.split(" ").map((name) => [
      name.replace(/-(.)/, (_, letter) => letter.toUpperCase()), style.getPropertyValue(`--${name}`).trim(),
    ]));
  }

  const page = {
    map, model, chosen: choice.fresh(), layers: {}, colourBy: "km", scales: scales(), selected: null, others: [],

    size: () => ramp.sizing(map.getSize().x),

    colourOf(one) {
      const value = one[page.colourBy], { low, high } = page.scales[page.colourBy];
      return value === null ? null : ramp.step(value, low, high);
    },

    themed() {
      page.ink = ink();
      page.ramp = ramp.colours(dark.matches ? "dark" : "light");
    },

    // Work out anew who is heard, after another choice or hour.
    changed() {
      page.hours = choice.hours(model, page.chosen);
      if (page.chosen.hour !== null && !page.hours.includes(page.chosen.hour)) page.chosen.hour = null;
      page.heard = choice.heard(model, page.chosen);
      page.shown = choice.placed(page.heard);
      page.byHour = choice.byHour(model, page.chosen);
      panel.list(page);
      panel.show(page, page.others);
      page.redraw();
    },

    redraw() {
      page.layer.refresh();
      if (page.layer.scene.centre !== framed) frame();
      controls.legend(page);
      controls.showHours(page);
      document.getElementById("drawn").textContent = drawnText();
      root.dataset.drawnSenders = String(page.shown.located);
    },

    // Choose a sender (or none), from the list with the map moved to it.
    select(sender, others = [], move = false) {
      const inPanel = document.getElementById("sender").contains(document.activeElement);
      page.selected = sender && { sender };
      page.others = others;
      panel.show(page, others);
      panel.list(page);
      page.layer.refresh();
      if (!sender) {
        if (inPanel) document.getElementById("search").focus();
        return;
      }
      if (move && sender.cell) {
        const at = [sender.lat, geo.wrap(sender.lon, page.layer.scene.centre)];
        if (!map.getBounds().contains(at)) map.panTo(at, { animate: false });
      }
      const box = document.getElementById("sender");
      box.scrollIntoView({ block: "nearest" });
      if (move) box.focus({ preventScroll: true });
    },
  };

  function drawnText() {
    const { located, circles, cells } = page.shown, parts = [`${panel.many(located, "sender", "senders")} drawn`];
    if (cells.length) {
      parts.push(`${panel.number(circles.length)} with the most receptions as circles, the other `
        + `${panel.number(located - circles.length)} counted in ${panel.many(cells.length, "cell", "cells")} of 2\u00b0 by 1\u00b0`);
    }
    const without = page.heard.length - located;
    if (without) parts.push(`${panel.many(without, "sender", "senders")} gave no locator and ${without === 1 ? "is" : "are"} not drawn`);
    return `${parts.join("; ")}.`;
  }

  function tip() {
    const box = panel.make("div", null, { class: "tip", hidden: "" }), place = map.getContainer();
    place.append(box);
    map.on("mousemove", ({ containerPoint }) => {
      const under = page.layer.under(containerPoint);
      box.hidden = !under.length;
      place.classList.toggle("over-sender", under.length > 0);
      if (!under.length) return;
      box.textContent = under.length > 1 ? `${under[0].sender.name} and ${under.length - 1} more` : under[0].sender.name;
      const right = containerPoint.x > map.getSize().x / 2;
      box.style.left = right ? "" : `${containerPoint.x + 14}px`;
      box.style.right = right ? `${map.getSize().x - containerPoint.x + 14}px` : "";
      box.style.top = `${containerPoint.y + 12}px`;
    });
    map.on("mouseout", () => (box.hidden = true));
  }

  // Zooming out ends where the whole world fits.
  function limitZoom() {
    const size = map.getSize();
    map.setMinZoom(Math.floor(10 * Math.log2(Math.min(size.x / 512, size.y / (256 * geo.STRETCH)))) / 10);
  }

  // Show all that is drawn, with the first receiver's meridian in the middle of the world.
  function frame() {
    const { centre } = page.layer.scene, size = map.getSize();
    framed = centre;
    limitZoom();
    const zoom = Math.min(FIT.maxZoom, map.getBoundsZoom(page.layer.bounds(), false, FIT.padding));
    const middle = page.layer.bounds().getCenter();
    const half = size.y / 2 / (map.options.crs.scale(zoom) / 180 * geo.STRETCH); // of the map's height, in degrees
    const room = Math.max(0, 90 - half); // the map's middle stays this near the equator, so that no space is lost
    map.setMaxBounds(null); // those of another receiver would hold the view back
    map.setView([Math.max(-room, Math.min(room, middle.lat)), middle.lng], zoom, { animate: false });
    map.setMaxBounds([[-90 - MARGIN_DEG, centre - 180 - MARGIN_DEG], [90 + MARGIN_DEG, centre + 180 + MARGIN_DEG]]);
  }

  document.getElementById("title").textContent = model.title;
  map.getContainer().setAttribute("role", "region");
  map.getContainer().setAttribute("aria-label", "Map: arrow keys move it, plus and minus zoom");
  page.themed();
  const few = model.senders.length <= FEW;
  document.querySelector("[data-layer=paths]").checked = few;
  controls.choices(page);
  controls.switches(page);
  controls.hours(page);
  panel.search(page);
  panel.read(page);
  page.hours = choice.hours(model, page.chosen);
  page.heard = choice.heard(model, page.chosen);
  page.shown = choice.placed(page.heard);
  page.layer = new Layer(page, geo.land(json("logtool-map-land")));
  page.layer.addTo(map);
  page.changed();
  tip();

  map.on("click", ({ containerPoint }) => {
    const under = page.layer.under(containerPoint);
    page.select(under.length ? under[0].sender : null, under);
  });
  document.addEventListener("keydown", ({ key }) => {
    if (key === "Escape" && page.selected) page.select(null);
  });
  dark.addEventListener("change", () => {
    page.themed();
    page.redraw();
  });
  window.addEventListener("resize", () => {
    limitZoom();
    page.redraw();
  });
  logtoolMap.page = page;
};
