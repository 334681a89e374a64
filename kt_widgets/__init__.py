"""kt_widgets: checked Alexander modules of knots, links and groups, with their figures.

Public names load on first use (SPEC 1): `import kt_widgets as kt` itself loads no other library.
The names and their types are listed in ``__init__.pyi``.
"""

import sys

import lazy_loader

__version__ = "0.1.0"

__getattr__, __dir__, __all__ = lazy_loader.attach_stub(__name__, __file__)

# Within IPython, values show their pictures: known by type name, so nothing else is loaded here.
if "IPython" in sys.modules:
    from kt_widgets.display import register

    register()

del sys, lazy_loader
