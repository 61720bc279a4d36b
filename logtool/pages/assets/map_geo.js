// Places on the WGS84 ellipsoid and lines over the map. Degrees and km; points are [lat, lon].
logtoolMap.geo = (() => {
  const A_KM = 6378.137; // WGS84, equatorial radius
  const F = 1 / 298.257223563; // WGS84, flattening
  const B_KM = A_KM * (1 - F);
  const RAD = Math.PI / 180;
  // The map is drawn with all degrees of latitude as long as at this parallel, where shapes are right.
  const TRUE_LAT_DEG = 40;
  const STRETCH = 1 / Math.cos(TRUE_LAT_DEG * RAD); // length of a degree of latitude over one of longitude
  const STEP_KM = 400; // between the points of a path
  const STEP_LON_DEG = 4; // and no farther apart than this, so that a path near a pole bends as it should
  const DEEPEST = 7; // halvings of a step

  // The longitude that names the same meridian and lies within 180 degrees of the centre.
  function wrap(lon, centre) {
    return lon - 360 * Math.floor((lon - centre + 180) / 360);
  }

  // Longitudes that run on instead of jumping by 360 degrees.
  function unwrap(points) {
    const out = [];
    for (const [lat, lon] of points) out.push([lat, out.length ? wrap(lon, out[out.length - 1][1]) : lon]);
    return out;
  }

  // T. Vincenty, Survey Review XXIII (176), 1975: the direct problem, on the sphere of reduced latitudes.
  function line(lat, lon, bearing) {
    const turn = bearing * RAD;
    const tanU = (1 - F) * Math.tan(Math.max(-90, Math.min(90, lat)) * RAD);
    const cosU = 1 / Math.hypot(1, tanU), sinU = tanU * cosU;
    const sinTurn = Math.sin(turn), cosTurn = Math.cos(turn);
    const start = Math.atan2(tanU, cosTurn);
    const sinAlpha = cosU * sinTurn, cos2Alpha = 1 - sinAlpha * sinAlpha;
    const u2 = cos2Alpha * (A_KM * A_KM - B_KM * B_KM) / (B_KM * B_KM);
    const a = 1 + u2 / 16384 * (4096 + u2 * (-768 + u2 * (320 - 175 * u2)));
    const b = u2 / 1024 * (256 + u2 * (-128 + u2 * (74 - 47 * u2)));
    const c = F / 16 * cos2Alpha * (4 + F * (4 - 3 * cos2Alpha));
    return (km) => {
      let sigma = km / (B_KM * a), before, cos2m, sin, cos;
      for (let i = 0; i < 20; i++) {
        cos2m = Math.cos(2 * start + sigma);
        sin = Math.sin(sigma);
        cos = Math.cos(sigma);
        const term = cos * (-1 + 2 * cos2m * cos2m)
          - b / 6 * cos2m * (-3 + 4 * sin * sin) * (-3 + 4 * cos2m * cos2m);
        before = sigma;
        sigma = km / (B_KM * a) + b * sin * (cos2m + b / 4 * term);
        if (Math.abs(sigma - before) < 1e-12) break;
      }
      const across = sinU * sin - cosU * cos * cosTurn;
      const toLat = Math.atan2(sinU * cos + cosU * sin * cosTurn, (1 - F) * Math.hypot(sinAlpha, across));
      const lambda = Math.atan2(sin * sinTurn, cosU * cos - sinU * sin * cosTurn);
      const turned = lambda - (1 - c) * F * sinAlpha
        * (sigma + c * sin * (cos2m + c * cos * (-1 + 2 * cos2m * cos2m)));
      return [toLat / RAD, lon + turned / RAD];
    };
  }

  const direct = (lat, lon, bearing, km) => line(lat, lon, bearing)(km);

  // Points from one parameter to another along a curve, closer together where the longitude changes fast.
  function curve(at, from, to, steps) {
    const out = [at(from)];
    function add(a, pa, b, depth) {
      const pb = at(b);
      pb[1] = wrap(pb[1], pa[1]);
      if (depth < DEEPEST && Math.abs(pb[1] - pa[1]) > STEP_LON_DEG) {
        const pm = add(a, pa, (a + b) / 2, depth + 1);
        return add((a + b) / 2, pm, b, depth + 1);
      }
      out.push(pb);
      return pb;
    }
    let last = out[0];
    for (let i = 1; i <= steps; i++) {
      last = add(from + (to - from) * (i - 1) / steps, last, from + (to - from) * i / steps, 0);
    }
    return out;
  }

  // The geodesic from a place along a bearing, with longitudes that run on.
  function path(lat, lon, bearing, km) {
    return curve(line(lat, lon, bearing), 0, km, Math.max(2, Math.ceil(km / STEP_KM)));
  }

  // The part of a circle between two bearings.
  function arc(lat, lon, km, fromDeg, toDeg) {
    return curve((bearing) => direct(lat, lon, bearing, km), fromDeg, toDeg, Math.max(4, Math.ceil((toDeg - fromDeg) / 2)));
  }

  // A ring given by its points, closed; a ring round a pole ends 360 degrees from where it began.
  function ring(lat, lon, km, lats, lons) {
    const step = 360 / lats.length;
    const points = unwrap(lats.map((value, i) => [value, lons[i]]).concat([[lats[0], lons[0]]]));
    const out = [points[0]];
    for (let i = 1; i < points.length; i++) {
      if (Math.abs(points[i][1] - out[out.length - 1][1]) > STEP_LON_DEG) {
        out.push(...unwrap([out[out.length - 1], ...arc(lat, lon, km, (i - 1) * step, i * step)]).slice(2));
      } else {
        out.push([points[i][0], wrap(points[i][1], out[out.length - 1][1])]);
      }
    }
    return out;
  }

  // Lines round the farthest sender of each sector of bearing; a sector with none (null) stays open.
  function outline(lat, lon, farthestKm) {
    const width = 360 / farthestKm.length;
    const lines = [];
    farthestKm.forEach((km, k) => {
      if (km === null) return;
      lines.push(arc(lat, lon, km, (k - 0.5) * width, (k + 0.5) * width));
      const next = farthestKm[(k + 1) % farthestKm.length];
      if (next === null || next === km) return;
      const along = line(lat, lon, (k + 0.5) * width);
      lines.push(curve(along, km, next, Math.max(2, Math.ceil(Math.abs(next - km) / STEP_KM))));
    });
    return lines;
  }

  // Where the sun's centre stands on the horizon, without refraction, from west to east over one turn.
  function terminator(sunLat, sunLon, west) {
    const tilt = Math.abs(sunLat) < 0.05 ? (sunLat < 0 ? -0.05 : 0.05) : sunLat; // never quite pole to pole
    const out = [];
    for (let lon = west; lon <= west + 360; lon++) {
      out.push([Math.atan(-Math.cos((lon - sunLon) * RAD) / Math.tan(tilt * RAD)) / RAD, lon]);
    }
    return out;
  }

  // The land's rings as flat lists of longitude and latitude.
  function land(packed) {
    const bytes = atob(packed.steps);
    let at = 0;
    const next = () => {
      let value = 0, weight = 1, byte;
      do {
        byte = bytes.charCodeAt(at++);
        value += (byte & 127) * weight;
        weight *= 128;
      } while (byte & 128);
      return value % 2 ? -(value + 1) / 2 : value / 2;
    };
    return packed.points.map((count) => {
      const flat = new Float64Array(2 * count);
      let lon = 0, lat = 0;
      for (let i = 0; i < count; i++) {
        flat[2 * i] = (lon += next()) * packed.step_deg;
        flat[2 * i + 1] = (lat += next()) * packed.step_deg;
      }
      return flat;
    });
  }

  // Leaflet's plain system of longitude and latitude, with latitudes stretched; folium's map asks for it by name.
  L.CRS.TrueAt40 = L.extend({}, L.CRS.EPSG4326, {
    transformation: new L.Transformation(1 / 180, 1, -STRETCH / 180, STRETCH / 2),
  });

  return { STRETCH, wrap, unwrap, direct, path, arc, ring, outline, terminator, land };
})();
