from . import figures, testing, verify
from .algebra.ideals import Ideal
from .algebra.laurent import LaurentPolynomial
from .algebra.matrix import LaurentMatrix
from .covers.chains import ChainComplex
from .covers.cover import Cover
from .diagrams.diagram import Diagram
from .errors import AlgebraError, CertificateError, DiagramError, KtError, LimitError, ParseError
from .exchange import from_json
from .groups.presentations import Presentation
from .groups.words import Word
from .invariants.seifert import seifert_matrix
from .modules.comparison import compare
from .modules.module import Module
from .places import Place
from .versions import show_versions
from .widgets.workbench import Workbench

__version__: str

__all__ = [
    "AlgebraError",
    "CertificateError",
    "ChainComplex",
    "Cover",
    "Diagram",
    "DiagramError",
    "Ideal",
    "KtError",
    "LaurentMatrix",
    "LaurentPolynomial",
    "LimitError",
    "Module",
    "ParseError",
    "Place",
    "Presentation",
    "Word",
    "Workbench",
    "compare",
    "figures",
    "from_json",
    "seifert_matrix",
    "show_versions",
    "testing",
    "verify",
]
