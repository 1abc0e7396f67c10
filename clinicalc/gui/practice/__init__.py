"""The practice behind the models: first run, people, trust, settings."""
