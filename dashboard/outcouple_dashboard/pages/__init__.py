"""The three pages: Design, Vary, Compare. Each gives ``layout()`` and ``register(app, desk)``."""
