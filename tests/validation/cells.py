"""The cells that `together` is tried on, listed before it was run on them."""

from __future__ import annotations

from itertools import product

from tests.validation.made_transmissions import Setting

SMALL = {"senders": 27, "sent": 500}
LARGE = {"senders": 120, "sent": 2400}

# Promised: coverage 93.5 to 96.5 %, bias under 0.2 dB.
PROMISED = {
    f"{difference_db} dB, {fading}, between {between_db} dB, {senders} senders": Setting(
        difference_db=difference_db, fading=fading, between_senders_db=between_db, **size
    )
    for difference_db, fading, between_db, (senders, size) in product(
        (0, 1, 3, 6), ("normal", "heavy"), (0, 1, 2), ((27, SMALL), (120, LARGE))
    )
}

# Measured, nothing promised but that the checks tell of intervals that miss by over 1 dB.
STRESS = {
    "12 senders": Setting(difference_db=3, senders=12, sent=400),
    "17 senders": Setting(difference_db=3, senders=17, sent=400),
    "one sender has 60 % of all": Setting(difference_db=3, busiest_share=0.6),
    "very unequal activity": Setting(difference_db=3, activity=1.6, senders=60, sent=1200),
    "thresholds 5 dB apart": Setting(difference_db=3, threshold_db=(-21.0, -16.0)),
    "other fading: Rayleigh": Setting(difference_db=3, fading="rayleigh", together_db=4.0, own_db=(4.0, 4.0)),
    "this side fades 4, that 2 dB": Setting(difference_db=3, own_db=(4.0, 2.0)),
    "this side fades 2, that 4 dB": Setting(difference_db=3, own_db=(2.0, 4.0)),
    "this side fades 8, that 2 dB": Setting(difference_db=3, own_db=(8.0, 2.0)),
    "this side fades 2, that 8 dB": Setting(difference_db=3, own_db=(2.0, 8.0)),
    "this side fades 1, that 10 dB": Setting(difference_db=3, own_db=(1.0, 10.0)),
    "scale ends at -5 dB on both": Setting(difference_db=3, highest_db=(-5.0, -5.0)),
    "scale ends at -12 dB on both": Setting(difference_db=3, highest_db=(-12.0, -12.0)),
    "scale ends at -8 dB on this side": Setting(difference_db=3, highest_db=(-8.0, 60.0)),
    "hard thresholds": Setting(difference_db=3, curve="hard"),
    "logistic thresholds, 3 dB wide": Setting(difference_db=3, curve="logistic", width_db=(3.0, 3.0)),
    "widths 0.3 and 4 dB": Setting(difference_db=3, width_db=(0.3, 4.0)),
    "3 % missed by that side": Setting(difference_db=3, missed=(0.0, 0.03)),
    "15 % missed by that side": Setting(difference_db=3, missed=(0.0, 0.15)),
    "30 % missed by that side": Setting(difference_db=3, missed=(0.0, 0.3)),
    "fading lasts, 0.95": Setting(difference_db=3, steady=0.95),
    "differences vary on this side only": Setting(
        difference_db=3, between_senders_db=2.0, this_share_of_between=1.0, **LARGE
    ),
    "stronger senders differ more, 0.3 dB per dB": Setting(difference_db=3, per_strength=0.3),
    "noise of this side varies by 2 dB over 10 spells": Setting(difference_db=3, noise_db=2.0),
    "the same, spells are told": Setting(difference_db=3, noise_db=2.0, tells_spells=True),
    "no noise, 10 spells are told": Setting(difference_db=3, tells_spells=True),
    "no noise, 40 spells are told": Setting(difference_db=3, tells_spells=True, spells=40),
    "weak: half is missed by that side": Setting(difference_db=6, level_db=-22.0),
}
