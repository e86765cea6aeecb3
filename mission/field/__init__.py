"""The runway that a take-off needs, and the climbs that must be flown with an engine out."""
