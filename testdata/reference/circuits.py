"""The list of reference circuits."""

import importlib
from dataclasses import dataclass, field

CHAPTERS = ("rectifiers", "variants", "filters", "transformers", "shunts", "regulators", "coldstarts", "direct", "corners",
            "stabilizers", "extremes", "switched", "switchons")
LIST = []


@dataclass
class Circuit:
    """A circuit: its cards, the function that builds its equations, and how to solve it."""
    name: str
    cards: str
    build: object
    start: list  # states: a guess for the steady state, or the state at switch-on
    period: float  # s
    mode: str = "nominal"
    cycles: int = 0  # of a cold start
    rtol: float = 1e-10
    plain: int = 2  # periods integrated before the search for the steady state
    steps: int = 1000  # least number in a period of the waveform
    instants: int = 20000  # at which a circuit without states is solved; few for direct sources
    breaks: tuple = ()  # s into the period: where a source bends or a switch acts
    second: tuple = ("Radau", 1e-8)  # the method that checks, and its tolerance
    closed_form: dict = field(default_factory=dict)  # (element, quantity): value known without integration


def circuit(name, cards, start, **more):
    """Decorator: enters the circuit whose equations the function builds."""
    def enter(build):
        more.setdefault("period", 0.02)
        LIST.append(Circuit(name, cards, build, list(start), **more))
        return build
    return enter


def every():
    for chapter in CHAPTERS:
        importlib.import_module(chapter)
    return LIST
