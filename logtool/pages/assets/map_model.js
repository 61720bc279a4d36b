// The data block as objects and columns.
logtoolMap.model = (() => {
  const middle = (edges) => edges && [(edges[0] + edges[2]) / 2, (edges[1] + edges[3]) / 2];

  // Times come as whole seconds since 1970, or as text where they have a fraction.
  function time(value) {
    return typeof value === "number" ? new Date(value * 1000).toISOString().replace(".000Z", "Z") : value;
  }

  function lines(flat, files) {
    const out = [];
    for (let i = 0; i < flat.length; i += 3) {
      out.push({ file: files[flat[i]], line: flat[i + 1], time: time(flat[i + 2]) });
    }
    return out;
  }

  // Runs of rows as columns of one length.
  function counts(packed) {
    const size = packed.hours.length;
    const columns = {
      size,
      sender: new Int32Array(size),
      group: new Int32Array(size),
      hour: new Int32Array(size),
      receptions: Int32Array.from(packed.receptions),
      snr: packed.snr,
      unplaced: new Set(packed.unplaced),
    };
    for (let i = 0, row = 0; i < packed.runs.length; i += 3) {
      for (let n = 0, hour = 0; n < packed.runs[i + 2]; n++, row++) {
        columns.sender[row] = packed.runs[i];
        columns.group[row] = packed.runs[i + 1];
        columns.hour[row] = hour += packed.hours[row];
      }
    }
    return columns;
  }

  function totals(flat) {
    const out = [];
    for (let i = 0; i < flat.length; i += 4) {
      out.push({ sender: flat[i], group: flat[i + 1], receptions: flat[i + 2], snr: flat[i + 3] });
    }
    return out;
  }

  // The largest sums of receptions of one sender: over all hours, and within one hour.
  function mosts(columns) {
    const all = new Map(), hourly = new Map();
    for (let row = 0; row < columns.size; row++) {
      const sender = columns.sender[row], key = `${sender} ${columns.hour[row]}`;
      all.set(sender, (all.get(sender) || 0) + columns.receptions[row]);
      hourly.set(key, (hourly.get(key) || 0) + columns.receptions[row]);
    }
    const most = (sums) => [...sums.values()].reduce((a, b) => Math.max(a, b), 1);
    return { mostOfAll: most(all), mostInHour: most(hourly) };
  }

  function read(data) {
    const model = {
      title: data.title,
      files: data.files,
      notes: data.notes,
      ledger: data.ledger,
      options: data.options,
      receivers: data.receivers.map(([name, locator, cell, rings, assumed]) => {
        const [lat, lon] = middle(cell);
        return { name, locator, cell, lat, lon, assumed: assumed === 1, rings: rings.map(([km, lats, lons]) => ({ km, lats, lons })) };
      }),
      senders: data.senders.map(([name, locator, cell, borrowed], index) => {
        const [lat, lon] = middle(cell) || [null, null];
        return { index, name, locator, cell, borrowed: borrowed === 1, lat, lon, pairs: [], totals: [] };
      }),
      groups: data.groups.map(([receiver, antenna, band, mode]) => ({ receiver, antenna, band, mode })),
      hours: data.hours.map(([start, sunLat, sunLon, nights, listening]) => ({ start, sunLat, sunLon, nights, listening })),
      counts: counts(data.counts),
    };
    model.pairs = data.pairs.map(([sender, receiver, km, uncertainty, bearing, first, last, again, flat, locator]) => ({
      sender, receiver, km, uncertainty, bearing, locator, again: again === 1,
      first: time(first), last: time(last), lines: lines(flat, data.files),
    }));
    for (const pair of model.pairs) model.senders[pair.sender].pairs.push(pair);
    for (const total of totals(data.totals)) model.senders[total.sender].totals.push(total);
    return Object.assign(model, mosts(model.counts));
  }

  return { read, time };
})();
