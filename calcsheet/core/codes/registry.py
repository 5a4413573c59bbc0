"""Every code edition by its name."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.core.codes.asce7_16 import ASCE716
from calcsheet.core.codes.asce7_22 import ASCE722
from calcsheet.core.codes.edition import Edition
from calcsheet.core.codes.en1998_2004 import EN1998
from calcsheet.core.codes.is1893_2016 import IS1893
from calcsheet.core.codes.points import GivenPoints

EDITIONS: Mapping[str, type[Edition]] = {e.name: e for e in (EN1998, ASCE716, ASCE722, IS1893, GivenPoints)}
