"""Property tests here are judged by their result, not by how busy the machine is."""

from hypothesis import settings

settings.register_profile("physics", deadline=None)
settings.load_profile("physics")
