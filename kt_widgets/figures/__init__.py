"""Figures: scenes, layouts and renderers; the names listed in ``__init__.pyi`` load on first use."""

import lazy_loader

__getattr__, __dir__, __all__ = lazy_loader.attach_stub(__name__, __file__)

del lazy_loader
