// What is chosen (receiver, antenna, band, mode, night, hour) and which senders that leaves.
logtoolMap.choice = (() => {
  const CIRCLES = 5000; // senders drawn one by one; the rest are drawn as cells with counts
  const ALL = "";

  const fresh = () => ({ receiver: ALL, antenna: ALL, band: ALL, mode: ALL, night: ALL, hour: null });

  const text = (value) => (value === null ? "not known" : value);

  function groupFits(model, choice, group) {
    return (choice.receiver === ALL || model.receivers[group.receiver].name === choice.receiver)
      && (choice.antenna === ALL || text(group.antenna) === choice.antenna)
      && (choice.band === ALL || group.band === choice.band)
      && (choice.mode === ALL || text(group.mode) === choice.mode);
  }

  const hourFits = (choice, hour, receiver) => choice.night === ALL || hour.nights[receiver] === choice.night;

  // Indices of the receivers that are chosen, in their order.
  function receivers(model, choice) {
    return model.receivers.map((_, i) => i)
      .filter((i) => choice.receiver === ALL || model.receivers[i].name === choice.receiver);
  }

  // Indices of the hours that the slider steps through.
  function hours(model, choice) {
    const shown = receivers(model, choice);
    return model.hours.map((_, i) => i)
      .filter((i) => shown.some((receiver) => hourFits(choice, model.hours[i], receiver)));
  }

  // The median of values that each stand for a number of receptions.
  function weightedMedian(values) {
    const sorted = values.filter(([value]) => value !== null).sort((p, q) => p[0] - q[0]);
    if (!sorted.length) return null;
    const half = sorted.reduce((sum, [, weight]) => sum + weight, 0) / 2;
    let sum = 0;
    for (let i = 0; i < sorted.length; i++) {
      sum += sorted[i][1];
      if (sum > half) return sorted[i][0];
      if (sum === half) return (sorted[i][0] + sorted[Math.min(i + 1, sorted.length - 1)][0]) / 2;
    }
    return sorted[sorted.length - 1][0];
  }

  // SNR of several receivers, bands or modes is never pooled: then there is none (null).
  function mixes(model, groups) {
    const kind = (i) => [model.groups[i].receiver, model.groups[i].band, model.groups[i].mode].join("\t");
    return groups.some((group) => kind(group) !== kind(groups[0]));
  }

  // The senders heard in what is chosen: receptions, SNR, distance and pair of each; most receptions first.
  function heard(model, choice) {
    const fits = model.groups.map((group) => groupFits(model, choice, group));
    const hourly = model.groups.map((group) => model.hours.map((hour) => hourFits(choice, hour, group.receiver)));
    const { size, sender, group, hour, receptions, snr, unplaced } = model.counts;
    const found = new Map();
    for (let row = 0; row < size; row++) {
      const g = group[row];
      if (!fits[g] || (choice.hour !== null && hour[row] !== choice.hour) || !hourly[g][hour[row]]) continue;
      let one = found.get(sender[row]);
      if (!one) found.set(sender[row], one = { sender: model.senders[sender[row]], receptions: 0, groups: [], rows: [], placed: false });
      one.receptions += receptions[row];
      if (!one.groups.includes(g)) one.groups.push(g);
      one.placed = one.placed || !unplaced.has(row);
      one.rows.push([snr[row], receptions[row]]);
    }
    const whole = choice.hour === null && choice.night === ALL;
    for (const one of found.values()) finish(model, one, whole);
    return [...found.values()].sort((p, q) => q.receptions - p.receptions || p.sender.index - q.sender.index);
  }

  function finish(model, one, whole) {
    const exact = whole && one.groups.length === 1 && one.sender.totals.find((total) => total.group === one.groups[0]);
    one.mixed = mixes(model, one.groups);
    one.snr = one.mixed ? null : exact ? exact.snr : weightedMedian(one.rows);
    const by = new Set(one.groups.map((group) => model.groups[group].receiver));
    one.pairs = one.sender.pairs.filter((pair) => by.has(pair.receiver));
    one.placed = one.placed && one.sender.cell !== null;
    one.km = !one.placed ? null : one.pairs.reduce((least, { km }) => (km !== null && (least === null || km < least) ? km : least), null);
    delete one.rows;
  }

  // Those with a place in what is chosen, as circles and, past the first CIRCLES, as counts in cells of 4 characters.
  function placed(senders) {
    const located = senders.filter((one) => one.placed);
    const cells = new Map();
    for (const one of located.slice(CIRCLES)) {
      const south = Math.floor(one.sender.lat), west = 2 * Math.floor(one.sender.lon / 2);
      const key = `${south} ${west}`;
      if (!cells.has(key)) cells.set(key, { south, west, senders: 0, receptions: 0 });
      cells.get(key).senders += 1;
      cells.get(key).receptions += one.receptions;
    }
    return { circles: located.slice(0, CIRCLES), cells: [...cells.values()], located: located.length };
  }

  // The farthest distance in each of 16 sectors of bearing, sector k centred at 22.5 k degrees; null where none.
  // A sender heard once may be a false decode, so only those heard again count.
  function farthest(senders, receiver) {
    const out = new Array(16).fill(null);
    for (const one of senders.filter(({ placed }) => placed)) {
      for (const { receiver: by, bearing, km, again } of one.pairs) {
        if (by !== receiver || bearing === null || km === null || !again) continue;
        const k = Math.floor((bearing + 11.25) / 22.5) % 16;
        if (out[k] === null || km > out[k]) out[k] = km;
      }
    }
    return out;
  }

  // Senders heard in each hour that the slider steps through.
  function byHour(model, choice) {
    const fits = model.groups.map((group) => groupFits(model, choice, group));
    const sets = new Map(hours(model, choice).map((hour) => [hour, new Set()]));
    const { size, sender, group, hour } = model.counts;
    for (let row = 0; row < size; row++) {
      if (!fits[group[row]] || !sets.has(hour[row])) continue;
      if (!hourFits(choice, model.hours[hour[row]], model.groups[group[row]].receiver)) continue;
      sets.get(hour[row]).add(sender[row]);
    }
    return [...sets.values()].map((set) => set.size);
  }

  return { ALL, CIRCLES, fresh, text, receivers, hours, heard, placed, farthest, byHour, weightedMedian };
})();
