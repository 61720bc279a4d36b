// Painting of one frame. A view tells where degrees fall on the canvas; x is longitude, y is latitude.
logtoolMap.paint = (() => {
  const { geo } = logtoolMap, { STRETCH } = geo;
  const SHIFTS = [-360, 0, 360];
  const FIELD_LON_DEG = 20, FIELD_LAT_DEG = 10; // a locator's first two letters
  const LETTERS = "ABCDEFGHIJKLMNOPQR";
  const FIELD_TEXT_PX = 46; // fields narrower than this show no letters
  const CELL_TEXT_PX = 22;
  const LABEL_PX = 58, LINE_PX = 15; // room that a ring's distance needs
  const RING_TEXT_DEG = [62, 242]; // bearings at which a ring says its distance
  const FONT = "system-ui, sans-serif";

  // A line of [lat, lon] added to a path, in every copy of the world that shows in the span of longitudes.
  function addLine(path, points, span) {
    let low = Infinity, high = -Infinity;
    for (const [, lon] of points) {
      if (lon < low) low = lon;
      if (lon > high) high = lon;
    }
    for (const shift of SHIFTS) {
      if (high + shift < span.west || low + shift > span.east) continue;
      points.forEach(([lat, lon], i) => (i ? path.lineTo(lon + shift, lat * STRETCH) : path.moveTo(lon + shift, lat * STRETCH)));
    }
  }

  // The land as areas and as coasts; the edges by which Antarctica is closed over the pole are no coast.
  function landPaths(rings) {
    const area = new Path2D(), coast = new Path2D();
    for (const flat of rings) {
      area.moveTo(flat[0], flat[1] * STRETCH);
      coast.moveTo(flat[0], flat[1] * STRETCH);
      for (let i = 2; i < flat.length; i += 2) {
        const pole = flat[i + 1] <= -90 || flat[i - 1] <= -90;
        area.lineTo(flat[i], flat[i + 1] * STRETCH);
        if (pole) coast.moveTo(flat[i], flat[i + 1] * STRETCH);
        else coast.lineTo(flat[i], flat[i + 1] * STRETCH);
      }
      area.closePath();
    }
    return { area, coast };
  }

  // From here on a path's units are degrees of longitude, in both directions.
  const inDegrees = (view, shift = 0) => view.ctx.setTransform(
    view.ratio * view.scale, 0, 0, -view.ratio * view.scale,
    view.ratio * (view.x0 + shift * view.scale), view.ratio * view.y0,
  );
  const inPixels = (view) => view.ctx.setTransform(view.ratio, 0, 0, view.ratio, 0, 0);
  const x = (view, lon) => view.x0 + lon * view.scale;
  const y = (view, lat) => view.y0 - lat * STRETCH * view.scale;

  function stroke(view, path, colour, widthPx, dashPx = []) {
    inDegrees(view);
    view.ctx.strokeStyle = colour;
    view.ctx.lineWidth = widthPx / view.scale;
    view.ctx.setLineDash(dashPx.map((length) => length / view.scale));
    view.ctx.stroke(path);
    view.ctx.setLineDash([]);
  }

  function label(view, text, px, py, colour, align = "center", size = 11, weight = 400) {
    const { ctx } = view;
    ctx.font = `${weight} ${size}px ${FONT}`;
    ctx.textAlign = align;
    ctx.textBaseline = "middle";
    ctx.lineJoin = "round";
    ctx.lineWidth = 3;
    ctx.strokeStyle = view.ink.halo;
    ctx.strokeText(text, px, py);
    ctx.fillStyle = colour;
    ctx.fillText(text, px, py);
  }

  function world(view, land) {
    const { ctx, ink, span } = view;
    inPixels(view);
    ctx.save(); // until unclip
    ctx.beginPath();
    ctx.rect(x(view, span.west), y(view, 90), 360 * view.scale, 180 * STRETCH * view.scale);
    ctx.clip();
    ctx.fillStyle = ink.sea;
    ctx.fill();
    const left = Math.max(span.west, -view.x0 / view.scale);
    const right = Math.min(span.east, (view.width - view.x0) / view.scale);
    for (const shift of SHIFTS) {
      if (shift - 180 > right || shift + 195 < left) continue; // one land ring reaches past 180, none past 195
      inDegrees(view, shift);
      ctx.fillStyle = ink.land;
      ctx.fill(land.area, "evenodd");
      ctx.strokeStyle = ink.coast;
      ctx.lineWidth = 0.6 / view.scale;
      ctx.stroke(land.coast);
    }
  }

  const unclip = (view) => view.ctx.restore();

  function fields(view) {
    const { ctx, ink, span } = view;
    inPixels(view);
    ctx.strokeStyle = ink.grid;
    ctx.lineWidth = 1;
    ctx.beginPath();
    const first = FIELD_LON_DEG * Math.ceil(span.west / FIELD_LON_DEG);
    for (let lon = first; lon <= span.east; lon += FIELD_LON_DEG) {
      ctx.moveTo(x(view, lon), y(view, 90));
      ctx.lineTo(x(view, lon), y(view, -90));
    }
    for (let lat = -90; lat <= 90; lat += FIELD_LAT_DEG) {
      ctx.moveTo(x(view, span.west), y(view, lat));
      ctx.lineTo(x(view, span.east), y(view, lat));
    }
    ctx.stroke();
    if (FIELD_LON_DEG * view.scale < FIELD_TEXT_PX) return;
    ctx.font = `11px ${FONT}`;
    ctx.textAlign = "left";
    ctx.textBaseline = "top";
    ctx.fillStyle = ink.gridText;
    for (let lon = first - FIELD_LON_DEG; lon <= span.east; lon += FIELD_LON_DEG) {
      const column = LETTERS[Math.round((geo.wrap(lon, 0) + 180) / FIELD_LON_DEG) % LETTERS.length];
      for (let row = 0; row < LETTERS.length; row++) {
        ctx.fillText(column + LETTERS[row], x(view, lon) + 4, y(view, (row + 1) * FIELD_LAT_DEG - 90) + 4);
      }
    }
  }

  function night(view, hour) {
    const { ctx, ink, span } = view;
    const line = geo.terminator(hour.sunLat, hour.sunLon, span.west);
    const edge = new Path2D();
    line.forEach(([lat, lon], i) => (i ? edge.lineTo(lon, lat * STRETCH) : edge.moveTo(lon, lat * STRETCH)));
    const dark = new Path2D(edge);
    const pole = (hour.sunLat >= 0 ? -90 : 90) * STRETCH;
    dark.lineTo(span.east, pole);
    dark.lineTo(span.west, pole);
    dark.closePath();
    inDegrees(view);
    ctx.fillStyle = ink.night;
    ctx.fill(dark);
    stroke(view, edge, ink.dusk, 1.2, [5, 4]);
  }

  // Distances on the rings, but for those that would cover another or a receiver.
  function ringLabels(view, labels, receivers) {
    inPixels(view);
    const taken = [...receivers];
    for (const one of labels) {
      const px = x(view, one.lon), py = y(view, one.lat);
      const free = taken.every(({ lat, lon }) => Math.abs(x(view, lon) - px) > LABEL_PX || Math.abs(y(view, lat) - py) > LINE_PX);
      if (!free) continue;
      taken.push(one);
      label(view, one.text, px, py, view.ink.ringText);
    }
  }

  function restCells(view, cells) {
    const { ctx, ink, span } = view;
    if (!cells.length) return;
    inPixels(view);
    const most = cells.reduce((a, cell) => Math.max(a, cell.senders), 1);
    const centre = (span.west + span.east) / 2;
    for (const cell of cells) {
      const west = geo.wrap(cell.west + 1, centre) - 1;
      const px = x(view, west), py = y(view, cell.south + 1), wide = 2 * view.scale, high = STRETCH * view.scale;
      ctx.globalAlpha = 0.2 + 0.5 * cell.senders / most;
      ctx.fillStyle = ink.rest;
      ctx.fillRect(px, py, Math.max(2, wide - 0.5), Math.max(1, high - 0.5));
      ctx.globalAlpha = 1;
      if (wide >= CELL_TEXT_PX) label(view, String(cell.senders), px + 4, py + 9, ink.text, "left");
    }
  }

  function box(view, edges, centre, colour, widthPx) {
    const [south, west, north, east] = edges;
    const from = geo.wrap((west + east) / 2, centre) - (east - west) / 2;
    inPixels(view);
    view.ctx.strokeStyle = colour;
    view.ctx.lineWidth = widthPx;
    view.ctx.strokeRect(x(view, from), y(view, north), (east - west) * view.scale, y(view, south) - y(view, north));
  }

  function circles(view, list) {
    const { ctx, ink } = view;
    inPixels(view);
    ctx.lineWidth = 0.8;
    for (const { lat, lon, r, colour } of list) {
      const px = x(view, lon), py = y(view, lat);
      if (px < -r || py < -r || px > view.width + r || py > view.height + r) continue;
      ctx.beginPath();
      ctx.arc(px, py, r, 0, 2 * Math.PI);
      ctx.fillStyle = colour === null ? ink.none : view.ramp[colour];
      ctx.strokeStyle = colour === null ? ink.noneEdge : ink.edge;
      ctx.fill();
      ctx.stroke();
    }
  }

  function receiver(view, { lat, lon, name }) {
    const { ctx, ink } = view;
    const px = x(view, lon), py = y(view, lat), size = 8;
    inPixels(view);
    ctx.beginPath();
    ctx.moveTo(px, py - size);
    ctx.lineTo(px + size, py);
    ctx.lineTo(px, py + size);
    ctx.lineTo(px - size, py);
    ctx.closePath();
    ctx.fillStyle = ink.receiver;
    ctx.strokeStyle = ink.halo;
    ctx.lineWidth = 2;
    ctx.stroke();
    ctx.fill();
    label(view, name, px + size + 4, py, ink.text, "left", 12, 600);
  }

  function halo(view, { lat, lon, r, name }) {
    const { ctx, ink } = view;
    inPixels(view);
    ctx.beginPath();
    ctx.arc(x(view, lon), y(view, lat), r + 3, 0, 2 * Math.PI);
    ctx.strokeStyle = ink.chosen;
    ctx.lineWidth = 2.5;
    ctx.stroke();
    label(view, name, x(view, lon), y(view, lat) - r - 13, ink.text, "center", 13, 600);
  }

  return {
    RING_TEXT_DEG, addLine, landPaths, stroke, world, unclip, fields, night, ringLabels, restCells, box, circles, receiver, halo,
  };
})();
