"""What is said with every assessment and picture, whatever the site."""

CAUTIONS = (
    "Screening level: depth-mean, steady, frictionless flow in the plane.",
    "Not for the safety of divers, swimmers or craft.",
    "Regulators' criteria and licensed engineers decide.",
)
