"""design -> outcome: light laid out, faces answered, light followed, read, decided, judged.

``evaluate`` gives the finished outcome of one design; ``evaluate_batch`` gives metrics over samples and is what every
study calls.
"""

from __future__ import annotations

from outcouple.evaluation.batch import Batch, evaluate_batch
from outcouple.evaluation.run import evaluate

__all__ = ["Batch", "evaluate", "evaluate_batch"]
