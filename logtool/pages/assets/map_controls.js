// The choices, the legend and the hours.
logtoolMap.controls = (() => {
  const { choice, ramp, panel: { make, number, many } } = logtoolMap;
  const HOUR_S = 3600;
  const PLAY_MS = 700;
  const THUMB_PX = 8; // half of a slider's thumb, so that bars stand over their places
  const NAMES = { receiver: "Receiver", antenna: "Antenna", band: "Band", mode: "Mode", night: "Night" };
  const ALL_OF = {
    receiver: "all receivers", antenna: "all antennas", band: "all bands", mode: "all modes", night: "all nights",
  };

  function values(model) {
    const distinct = (list) => [...new Set(list)].sort();
    return {
      receiver: model.receivers.map(({ name }) => name),
      antenna: distinct(model.groups.map(({ antenna }) => choice.text(antenna))),
      band: distinct(model.groups.map(({ band }) => band)),
      mode: distinct(model.groups.map(({ mode }) => choice.text(mode))),
      night: distinct(model.hours.flatMap(({ nights }) => nights).filter((night) => night !== null)),
    };
  }

  // A select for each thing of which there is more than one.
  function choices(page) {
    const box = document.getElementById("choices");
    for (const [key, list] of Object.entries(values(page.model))) {
      if (list.length < 2) continue;
      const label = make("label", NAMES[key]), select = make("select", null, { "data-choice": key });
      select.append(make("option", ALL_OF[key], { value: choice.ALL }));
      for (const value of list) select.append(make("option", value, { value }));
      select.addEventListener("change", () => {
        page.chosen[key] = select.value;
        page.changed();
      });
      label.append(select);
      box.append(label);
    }
  }

  function switches(page) {
    for (const input of document.querySelectorAll("[data-layer]")) {
      page.layers[input.dataset.layer] = input.checked;
      input.addEventListener("change", () => {
        page.layers[input.dataset.layer] = input.checked;
        page.redraw();
      });
    }
    for (const input of document.querySelectorAll("[name=colour]")) {
      input.addEventListener("change", () => {
        page.colourBy = input.value;
        page.redraw();
      });
    }
  }

  function sizes(page) {
    const most = page.chosen.hour === null ? page.model.mostOfAll : page.model.mostInHour;
    const row = make("div", null, { class: "sizes" });
    const least = Math.max(1, Math.floor(most / (ramp.LARGEST_PX / ramp.SMALLEST_PX) ** 2));
    [...new Set([least, Math.max(1, Math.round(most / 4)), most])].forEach((count) => {
      const item = make("span"), circle = make("i", null, { class: "sized" });
      circle.style.width = circle.style.height = `${2 * ramp.radius(count, most, page.size())}px`;
      item.append(circle, many(count, "reception", "receptions") + (count === least && count > 1 ? " or fewer" : ""));
      row.append(item);
    });
    return row;
  }

  function marks(page) {
    const row = make("div", null, { class: "sizes" });
    const mark = (style, text) => {
      const item = make("span");
      item.append(make("i", null, { class: style }), text);
      row.append(item);
    };
    mark("mark", "receiver");
    if (page.layers.outline) mark("stroke", "farthest heard again, by bearing; open where nobody was");
    return row;
  }

  function legend(page) {
    const { low, high, unit } = page.scales[page.colourBy];
    const bar = make("div", null, { class: "scale" }), ticks = make("div", null, { class: "ticks" });
    bar.style.background = `linear-gradient(to right, ${page.ramp.join(",")})`;
    for (let i = 0; i <= 4; i++) ticks.append(make("span", `${number(low + (high - low) * i / 4, 1)}${i === 4 ? ` ${unit}` : ""}`));
    const parts = [bar, ticks];
    if (page.colourBy === "snr") {
      const none = make("div", null, { class: "sizes" }), item = make("span"), circle = make("i");
      circle.style.width = circle.style.height = "10px";
      item.append(circle, "no SNR, or of several receivers, bands or modes");
      none.append(item);
      parts.push(make("p", "Median SNR, noise in 2500 Hz"), none);
    } else {
      parts.push(make("p", "Distance to the nearest receiver drawn that heard it"));
    }
    document.getElementById("legend").replaceChildren(...parts, sizes(page), marks(page));
  }

  const clock = (unixS) => new Date(unixS * 1000).toISOString();

  function listened(model, hour, receiver) {
    if (!hour.listening.length) return "";
    const minutes = hour.listening[receiver], { name, assumed } = model.receivers[receiver];
    if (minutes === null || minutes === undefined) return `; ${name}: listening not ${assumed ? "known" : "recorded"}`;
    return minutes > 0 ? `; ${name} listened ${number(minutes)} min${assumed ? " (assumed)" : ""}` : `; ${name} did not listen`;
  }

  // UTC, the mean solar time at each receiver drawn, and how long it listened.
  function hourText(page) {
    const { model, chosen } = page, night = chosen.night === choice.ALL ? "" : ` of the night ${chosen.night}`;
    if (chosen.hour === null) {
      const list = page.hours;
      if (!list.length) return "No hours.";
      const from = clock(model.hours[list[0]].start), to = clock(model.hours[list[list.length - 1]].start + HOUR_S);
      return `All hours${night}: ${from.slice(0, 10)} ${from.slice(11, 16)} to ${to.slice(0, 10)} ${to.slice(11, 16)} UTC`;
    }
    const hour = model.hours[chosen.hour], start = clock(hour.start);
    const solar = choice.receivers(model, chosen).map((i) => {
      const { name, lon } = model.receivers[i];
      return `${clock(hour.start + lon / 15 * HOUR_S).slice(11, 16)} mean solar time at ${name}${listened(model, hour, i)}`;
    });
    return [`${start.slice(0, 10)} ${start.slice(11, 16)} to ${clock(hour.start + HOUR_S).slice(11, 16)} UTC`, ...solar].join(" \u00b7 ");
  }

  // Bars of the number of senders in each hour, over the slider.
  function strip(page) {
    const canvas = document.getElementById("hour-strip"), { clientWidth: wide, clientHeight: high } = canvas;
    const slider = document.getElementById("hour-slider"), ratio = window.devicePixelRatio || 1;
    canvas.width = wide * ratio;
    canvas.height = high * ratio;
    const left = slider.offsetLeft - canvas.offsetLeft + THUMB_PX, span = slider.offsetWidth - 2 * THUMB_PX;
    const counts = page.byHour, most = Math.max(1, ...counts), step = span / Math.max(1, counts.length);
    const wideBar = Math.min(2 * THUMB_PX - 2, Math.max(1, step - 1));
    const ctx = canvas.getContext("2d");
    ctx.scale(ratio, ratio);
    counts.forEach((count, i) => {
      const tall = count ? Math.max(2, (high - 2) * count / most) : 0;
      ctx.fillStyle = page.hours[i] === page.chosen.hour ? page.ink.barNow : page.ink.bar;
      ctx.fillRect(left + step * (i + 1) - wideBar / 2, high - tall, wideBar, tall);
    });
  }

  function showHours(page) {
    const slider = document.getElementById("hour-slider"), text = hourText(page);
    slider.max = page.hours.length;
    slider.value = page.chosen.hour === null ? 0 : page.hours.indexOf(page.chosen.hour) + 1;
    slider.setAttribute("aria-valuetext", text);
    document.getElementById("hour-text").textContent = text;
    document.getElementById("hour-all").setAttribute("aria-pressed", String(page.chosen.hour === null));
    strip(page);
  }

  function hours(page) {
    const slider = document.getElementById("hour-slider"), play = document.getElementById("hour-play");
    let timer = null;
    const go = (position) => {
      page.chosen.hour = position > 0 ? page.hours[position - 1] : null;
      page.changed();
    };
    const stop = () => {
      clearInterval(timer);
      timer = null;
      play.textContent = "Play";
      play.setAttribute("aria-pressed", "false");
    };
    slider.addEventListener("input", () => {
      stop();
      go(Number(slider.value));
    });
    document.getElementById("hour-all").addEventListener("click", () => {
      stop();
      go(0);
    });
    play.addEventListener("click", () => {
      if (timer !== null) return stop();
      play.textContent = "Stop";
      play.setAttribute("aria-pressed", "true");
      if (Number(slider.value) >= page.hours.length) go(0);
      timer = setInterval(() => {
        if (Number(slider.value) >= page.hours.length) return stop();
        return go(Number(slider.value) + 1);
      }, PLAY_MS);
      return undefined;
    });
  }

  return { choices, switches, legend, hours, showHours, strip };
})();
