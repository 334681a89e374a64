from .cover_figure import cover
from .diagram_figure import diagram
from .dossier_folder import dossier
from .drawing import Drawing
from .explain_figure import explain

__all__ = ["Drawing", "cover", "diagram", "dossier", "explain"]
