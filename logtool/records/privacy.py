"""What is left out or made coarse before anything is shared: places, texts and names."""

from __future__ import annotations

import base64
import hashlib
import hmac
from dataclasses import dataclass, field

COARSE_CHARACTERS = (4, 6, 8)  # what a locator can be cut to; a setup's needs four
PSEUDONYM_CHARACTERS = 10  # 50 bits: two of 100 000 senders share one by a chance of 4 in a million
COMPOUND = "/C"  # ends the pseudonym of a call sign with `/`, which stands for itself and borrows no place


@dataclass(frozen=True)
class Privacy:
    """What an output leaves out: locators are cut, texts dropped, senders named by a secret key.

    With any of them an output also holds no text, no path and no digest of an input.
    """

    coarsen: int | None = None  # characters that a locator keeps
    without_text: bool = False
    key: bytes | None = field(default=None, repr=False)  # the secret that hides senders

    def __bool__(self) -> bool:
        return self.coarsen is not None or self.without_text or self.key is not None

    def locator(self, locator: str) -> str:
        """Return a locator with no more characters than may be shown.

        >>> Privacy(coarsen=4).locator("JO74xa")
        'JO74'
        """
        return locator if self.coarsen is None else locator[: self.coarsen]

    def call(self, call: str) -> str:
        """Return a call sign (upper case) as it may be shown: by HMAC-SHA-256 (RFC 2104) where it is hidden.

        The same key gives the same name for the same call sign; nobody without the key gets back.

        >>> Privacy().call("Q1ABC")
        'Q1ABC'
        >>> Privacy(key=b"secret").call("Q1ABC")
        'S-FYGWDYSSA7'
        """
        if self.key is None or not call:
            return call
        digest = hmac.new(self.key, call.encode(), hashlib.sha256).digest()
        name = base64.b32encode(digest).decode()[:PSEUDONYM_CHARACTERS]
        return f"S-{name}{COMPOUND if '/' in call else ''}"
