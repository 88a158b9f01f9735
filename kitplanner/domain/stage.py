"""What every electrical step between generator and plug has in common, and the step known only by its efficiency."""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple, Protocol

from kitplanner.domain.units import Values


class Flow(NamedTuple):
    """Volts [V] and amps [A] before and behind one step."""

    in_v: Values
    in_a: Values
    out_v: Values
    out_a: Values


class Stage(Protocol):
    """One step of a chain, marched from the generator towards the plug."""

    @property
    def name(self) -> str:
        """Name shown in tables."""
        ...

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps behind the step for volts and amps before it."""
        ...

    def loss_w(self, at: Flow) -> Values:
        """Heat of the step [W], from its own law and not as a difference."""
        ...


@dataclass(frozen=True)
class FixedLoss:
    """A step known only by its efficiency [-]: volts pass, amps shrink."""

    eta: float
    name: str = "loss"

    def forward(self, in_v: Values, in_a: Values) -> tuple[Values, Values]:
        """Volts and amps behind the step for volts and amps before it."""
        return in_v, self.eta * in_a

    def loss_w(self, at: Flow) -> Values:
        """Heat of the step [W]: (1 - eta) V I."""
        return (1.0 - self.eta) * at.in_v * at.in_a
