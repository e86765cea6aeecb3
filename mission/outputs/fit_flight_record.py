"""Factors fitted to a known flight, for programs."""

from __future__ import annotations

from typing import Any

from mission.outputs.records import VERSION, failure_record
from mission.outputs.wording import in_plain_words
from mission.questions.fit_flight import FittedKnown, FlightFit
from mission.questions.told_factors import FACTORS

Record = dict[str, Any]


def fit_flight_record(found: FlightFit) -> Record:
    """A fit as ``longlegs-flight-fit``; what is not known is null."""
    flight, blocked = found.flight, found.blocked
    failed = flight if blocked is None else blocked.flight
    return {
        "format": "longlegs-flight-fit",
        "version": VERSION,
        "mission": flight.mission,
        "aircraft": flight.aircraft,
        "engine": flight.engine,
        "is_fitted": blocked is None,
        "flown": found.flown,
        "has_settled": found.has_settled,
        "flights": found.flights,
        "factors": [
            {
                "key": factor.key,
                "start": factor.start,
                "value": factor.value,
                "is_free": factor.is_free,
                "percent_for_1_percent_in_every_known": factor.doubt,
            }
            for factor in found.factors
        ],
        "held_because": found.held_because,
        "knowns": [_known(known) for known in found.knowns],
        "not_flown_with": None
        if blocked is None
        else dict(zip(FACTORS, blocked.factors, strict=True)),
        "failure": failure_record(failed.failure),
    }


def _known(known: FittedKnown) -> Record:
    value = known.value
    return {
        "segment": value.segment,
        "what": in_plain_words(value.what),
        "unit": value.unit,
        "known": value.known,
        "before": known.before,
        "after": value.flown,
        "error": value.error,
        "percent_for_1_percent_of": dict(zip(FACTORS, known.slopes, strict=True)),
    }
