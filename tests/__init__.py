"""The tests, a mirror of the package; `reference` holds the outside checks, `journeys` whole paths of a person."""
