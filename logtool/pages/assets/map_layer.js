// The scene made from what is chosen, and the canvas that shows it.
logtoolMap.layer = (() => {
  const { geo, ramp, choice, paint } = logtoolMap;
  const SPARE = 0.3; // the canvas reaches this share of the map's size past each edge, so that a drag only moves it
  const CELL_SHOWS_PX = 24; // cells of 4 characters at least this wide are drawn for all senders
  const HIT_PX = window.matchMedia("(pointer: coarse)").matches ? 11 : 5; // a click counts this far outside a circle

  // The lines from the receivers that heard a sender; straight where the bearing is not known.
  function pathsOf(model, one, centre) {
    return one.pairs.filter((pair) => pair.km !== null).map((pair) => {
      const from = model.receivers[pair.receiver], lon = geo.wrap(from.lon, centre);
      if (pair.bearing !== null) return geo.path(from.lat, lon, pair.bearing, pair.km);
      return [[from.lat, lon], [one.sender.lat, geo.wrap(one.sender.lon, lon)]];
    });
  }

  // Everything that does not change while one pans: lines as paths, circles with place, size and colour.
  function scene(page) {
    const { model, chosen, shown } = page;
    const receivers = choice.receivers(model, chosen);
    const centre = receivers.length ? model.receivers[receivers[0]].lon : 0;
    const span = { west: centre - 180, east: centre + 180 };
    const most = chosen.hour === null ? model.mostOfAll : model.mostInHour;
    const out = {
      centre, span, cells: shown.cells, labels: [],
      hour: chosen.hour === null ? null : model.hours[chosen.hour],
      receivers: receivers.map((i) => ({ ...model.receivers[i], lon: geo.wrap(model.receivers[i].lon, centre) })),
      rings: new Path2D(), outline: new Path2D(), paths: new Path2D(), chosenPath: null, chosenOne: null,
    };
    out.circles = shown.circles.map((one) => ({
      one, name: one.sender.name, lat: one.sender.lat, lon: geo.wrap(one.sender.lon, centre),
      r: ramp.radius(one.receptions, most, page.size()), colour: page.colourOf(one),
    }));
    for (const i of receivers) {
      const { lat, lon, rings } = model.receivers[i];
      for (const { km, lats, lons } of rings) {
        paint.addLine(out.rings, geo.ring(lat, lon, km, lats, lons), span);
        for (const bearing of paint.RING_TEXT_DEG) {
          const [toLat, toLon] = geo.direct(lat, lon, bearing, km);
          out.labels.push({ lat: toLat, lon: geo.wrap(toLon, centre), text: `${km.toLocaleString("en").replace(",", "\u202f")} km` });
        }
      }
      for (const line of geo.outline(lat, geo.wrap(lon, centre), choice.farthest(page.heard, i))) {
        paint.addLine(out.outline, line, span);
      }
    }
    if (page.layers.paths) {
      for (const { one } of out.circles) {
        for (const line of pathsOf(model, one, centre)) paint.addLine(out.paths, line, span);
      }
    }
    if (page.selected) choose(page, out);
    return out;
  }

  // The chosen sender's path and circle, which are drawn even where the layers leave it out.
  function choose(page, out) {
    const { sender } = page.selected;
    if (!sender.cell) return;
    const here = out.circles.find(({ one }) => one.sender === sender);
    const one = here ? here.one : { sender, pairs: sender.pairs };
    out.chosenPath = new Path2D();
    for (const line of pathsOf(page.model, one, out.centre)) paint.addLine(out.chosenPath, line, out.span);
    out.chosenOne = here || { name: sender.name, lat: sender.lat, lon: geo.wrap(sender.lon, out.centre), r: ramp.SMALLEST_PX };
    out.chosenCell = sender.cell;
  }

  const Layer = L.Layer.extend({
    initialize(page, land) {
      this.page = page;
      this.land = paint.landPaths(land);
    },

    onAdd() {
      this.canvas = L.DomUtil.create("canvas", "senders-canvas", this.getPane());
      this.canvas.setAttribute("aria-hidden", "true");
      this.refresh();
    },

    getEvents() {
      return { move: this.follow, moveend: this.draw, zoom: this.draw, viewreset: this.draw, resize: this.draw };
    },

    // Make the scene anew, for other senders, layers or colours.
    refresh() {
      this.scene = scene(this.page);
      this.draw();
    },

    // While one drags, the canvas moves with the map; draw only when its spare part is used up.
    follow() {
      const corner = this._map.containerPointToLayerPoint([0, 0]);
      const gone = corner.subtract(this.corner);
      if (Math.abs(gone.x) > this.spare.x || Math.abs(gone.y) > this.spare.y) this.draw();
    },

    draw() {
      const map = this._map, size = map.getSize(), ratio = window.devicePixelRatio || 1;
      if (!size.x || !size.y) return;
      this.spare = size.multiplyBy(SPARE).round();
      this.corner = map.containerPointToLayerPoint([0, 0]);
      const whole = size.add(this.spare.multiplyBy(2));
      L.DomUtil.setPosition(this.canvas, this.corner.subtract(this.spare));
      this.canvas.width = Math.round(whole.x * ratio); // also clears the canvas and its clip
      this.canvas.height = Math.round(whole.y * ratio);
      this.canvas.style.width = `${whole.x}px`;
      this.canvas.style.height = `${whole.y}px`;
      const origin = map.latLngToContainerPoint([0, 0]).add(this.spare);
      this.paint({
        ctx: this.canvas.getContext("2d"), ratio, ink: this.page.ink, ramp: this.page.ramp, span: this.scene.span,
        scale: map.options.crs.scale(map.getZoom()) / 180, // px per degree of longitude
        x0: origin.x, y0: origin.y, width: whole.x, height: whole.y,
      });
    },

    paint(view) {
      const { scene: now, page } = this;
      paint.world(view, this.land);
      if (page.layers.fields) paint.fields(view);
      if (now.hour && page.layers.night) paint.night(view, now.hour);
      if (page.layers.rings) paint.stroke(view, now.rings, view.ink.ring, 1.2);
      paint.restCells(view, now.cells);
      if (2 * view.scale >= CELL_SHOWS_PX) {
        for (const { one } of now.circles) paint.box(view, one.sender.cell, now.centre, view.ink.cell, 1);
      }
      if (page.layers.paths) paint.stroke(view, now.paths, view.ink.path, 0.8);
      if (page.layers.outline) {
        paint.stroke(view, now.outline, view.ink.halo, 4.5);
        paint.stroke(view, now.outline, view.ink.reach, 2.2);
      }
      if (page.layers.rings) paint.ringLabels(view, now.labels, now.receivers);
      if (now.chosenPath) {
        paint.stroke(view, now.chosenPath, view.ink.halo, 5);
        paint.stroke(view, now.chosenPath, view.ink.chosen, 2.5);
      }
      paint.unclip(view);
      paint.circles(view, now.circles);
      if (now.chosenOne) {
        paint.box(view, now.chosenCell, now.centre, view.ink.chosen, 2);
        paint.halo(view, now.chosenOne);
      }
      for (const receiver of now.receivers) paint.receiver(view, receiver);
    },

    // The senders whose circles lie under a point of the map, the uppermost first.
    under(point) {
      const found = [];
      for (const { one, lat, lon, r } of this.scene.circles) {
        const at = this._map.latLngToContainerPoint([lat, lon]);
        if (Math.hypot(at.x - point.x, at.y - point.y) <= r + HIT_PX) found.push(one);
      }
      return found.reverse();
    },

    // The box round all that is drawn as circles, and the receivers.
    bounds() {
      const points = [...this.scene.circles, ...this.scene.receivers].map(({ lat, lon }) => [lat, lon]);
      return points.length ? L.latLngBounds(points) : L.latLngBounds([[-90, -180], [90, 180]]);
    },
  });

  return { Layer, scene, pathsOf };
})();
