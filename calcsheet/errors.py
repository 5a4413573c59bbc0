"""Every refusal that is one sentence for the engineer."""

from __future__ import annotations

from calcsheet.core.errors import ModelError
from calcsheet.job.errors import InputError
from calcsheet.record.errors import RecordError

REFUSALS = (InputError, ModelError, RecordError, FileNotFoundError)
