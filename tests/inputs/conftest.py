"""Time is no criterion here: a busy machine must not make a right answer a failure."""

from hypothesis import settings

settings.register_profile("patient", deadline=None)
settings.load_profile("patient")
