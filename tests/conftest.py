"""What holds for every test: random examples are never judged by the clock, since speed is measured in `benchmarks`."""

from hypothesis import settings

settings.register_profile("unhurried", deadline=None)
settings.load_profile("unhurried")
