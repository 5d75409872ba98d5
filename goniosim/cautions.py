"""The caution that every output carries."""

CAUTION = (
    "A planning aid, not a medical device. Figures come from a model of the stated "
    "measurements: verify in the eye, and follow local rules and licensed clinical judgement."
)
