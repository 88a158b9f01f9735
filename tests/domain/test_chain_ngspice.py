"""Two chains as circuits in ngspice, in and out of regulation.

The netlists use the simulator's own diode model, real resistors and its own Newton iteration, and share
with the code under test only the constants. The linear regulator is one series drop
max(1.6 V + 0.35 ohm I, V(in) - V(adj) - 1.25 V), which converges at once where an error amplifier does not.
Its adjustment current flows in dropout too, where the planner's law leaves it out: 12.5 uA of divider current
at most, 0.004 % of the load. ngspice does not flag a collapsed converter, it returns the branch near short
circuit; so collapse is no part of this check.
"""

from __future__ import annotations

import dataclasses
import math
import re
import shutil
import subprocess
from pathlib import Path

import pytest

from kitplanner.domain.chain import Cable, Chain, Comfort, Diode, LinearRegulator, SwitchingConverter, operating_point
from tests.domain import chain_sets

# Comfort is no matter of the circuit.
A = dataclasses.replace(chain_sets.A, comfort=Comfort())
B = dataclasses.replace(chain_sets.B, comfort=Comfort())

NGSPICE = shutil.which("ngspice")
pytestmark = pytest.mark.skipif(NGSPICE is None, reason="ngspice is not installed (Debian package ngspice)")

HEADER = """{title}
.options reltol=1e-9 abstol=1e-15 vntol=1e-12 gmin=1e-16 temp=27 tnom=27
.model d d(is={saturation_a} n={ideality} rs={series_ohm})
vemf emf 0 {emf_v}
ra emf gen {ra_ohm}
"""

LINEAR = """d1 gen mid d
d2 mid in d
bdrop in sense v = max({dropout_v} + {dropout_ohm} * i(bdrop), v(in) - v(adj) - {reference_v})
vsense sense out 0
iadj in adj {adjust_a}
r1 out adj {r1_ohm}
r2 adj 0 {r2_ohm}
"""

# A constant-power load on the input side and a fixed source on the output side.
CONVERTER = """d1 gen in d
bin in 0 i = ({output_v} * {amps} + {a0_w} + {a1_w_per_v} * v(in) + ({b0_v} + {b1_v_per_v} * v(in)) * {amps}
+ + {c_ohm} * {amps} ^ 2) / v(in)
vout out 0 {output_v}
.nodeset v(in)={start_v} v(gen)={start_v}
"""

FOOTER = """rcable out plug {loop_ohm}
iload plug 0 {amps}
btorque torque 0 v = {ratio} * ({ke_v_s} * (-i(vemf)) + {tc_nm} + {b_nm_s} * {shaft_rad_s}) / {eta} + {drag_nm}
bhuman human 0 v = v(torque) * {crank_rad_s}
.control
set numdgt=12
op
print v(in) v(out) v(plug) i(vemf) v(torque) v(human)
quit
.endc
.end
"""


def netlist(chain: Chain, rpm: float, amps: float) -> str:
    """The chain as a circuit."""
    diode, regulator, cable = chain.stages
    assert isinstance(diode, Diode)
    assert isinstance(cable, Cable)
    crank = rpm * math.pi / 30.0
    values = dataclasses.asdict(chain.machine) | dataclasses.asdict(chain.gear) | dataclasses.asdict(diode)
    values |= dataclasses.asdict(regulator) | {"loop_ohm": cable.loop_ohm, "amps": amps}  # type: ignore[call-overload]
    emf = chain.machine.ke_v_s * crank * chain.gear.ratio
    values |= {"emf_v": emf, "start_v": emf * 0.9, "crank_rad_s": crank, "shaft_rad_s": crank * chain.gear.ratio}
    values["title"] = "chain"
    middle = LINEAR if isinstance(regulator, LinearRegulator) else CONVERTER
    return (HEADER + middle + FOOTER).format_map({k: repr(v) if isinstance(v, float) else v for k, v in values.items()})


def simulate(chain: Chain, rpm: float, amps: float, folder: Path) -> dict[str, float]:
    """Operating point by ngspice."""
    path = folder / "chain.cir"
    path.write_text(netlist(chain, rpm, amps), encoding="ascii")
    assert NGSPICE is not None
    done = subprocess.run(
        [NGSPICE, "-b", str(path)], capture_output=True, text=True, timeout=60, check=False, cwd=folder
    )
    found = {name: float(value) for name, value in re.findall(r"^([vi]\(\w+\)) = (\S+)$", done.stdout, re.MULTILINE)}
    assert len(found) == 6, done.stdout + done.stderr
    return found


def agree(chain: Chain, rpm: float, amps: float, folder: Path) -> tuple[str, ...]:
    """Compare one point to 1e-4 and return its states."""
    spice = simulate(chain, rpm, amps, folder)
    point = operating_point(chain, rpm, amps)
    pairs = {
        "v(in)": point.regulator_in_v,
        "v(out)": point.stage_out_v[-2],
        "v(plug)": point.plug_v,
        "i(vemf)": -point.generator_a,
        "v(torque)": point.torque_nm,
        "v(human)": point.human_w,
    }
    for name, value in pairs.items():
        assert float(value) == pytest.approx(spice[name], rel=1e-4), name
    return point.states_at()


@pytest.mark.parametrize(
    ("rpm", "amps", "in_dropout"),
    [
        (100.0, 0.3, True), (110.0, 0.3, True), (120.0, 0.3, True), (128.0, 0.3, True), (135.0, 0.5, True),
        (130.0, 0.3, False), (140.0, 0.3, False), (155.0, 0.5, False),
    ],
)  # fmt: skip
def test_linear_chain(rpm: float, amps: float, in_dropout: bool, tmp_path: Path) -> None:
    assert ("dropout" in agree(A, rpm, amps, tmp_path)) == in_dropout


def test_the_published_digits_of_the_linear_chain(tmp_path: Path) -> None:
    """140 rpm and 0.3 A, from a run of ngspice 39 kept as a golden point."""
    spice = simulate(A, 140.0, 0.3, tmp_path)
    kept = (7.487679, 5.018000, 4.918125, -0.3104667, 0.3604279, 5.284149)
    assert list(spice.values()) == pytest.approx(kept, rel=2e-6)


def test_heat_of_the_die(tmp_path: Path) -> None:
    spice = simulate(A, 140.0, 0.3, tmp_path)
    through = -spice["i(vemf)"] - 50e-6
    die_w = (spice["v(in)"] - spice["v(out)"]) * through + 50e-6 * (spice["v(in)"] - spice["v(out)"] + 1.25)
    assert float(operating_point(A, 140.0, 0.3).regulator_w) == pytest.approx(die_w, rel=1e-6)


@pytest.mark.parametrize(
    ("rpm", "amps"), [(70.0, 1.0), (70.0, 2.0), (60.0, 1.0), (50.0, 2.0), (45.0, 1.0), (42.0, 1.0)]
)
def test_converter_chain(rpm: float, amps: float, tmp_path: Path) -> None:
    assert agree(B, rpm, amps, tmp_path) == ()


@pytest.mark.parametrize(("rpm", "amps"), [(40.0, 1.0), (36.0, 1.0), (34.0, 1.0), (47.0, 2.0)])
def test_converter_chain_below_its_lockout(rpm: float, amps: float, tmp_path: Path) -> None:
    """Without lock-out the law goes on down to the collapse; with it the point is off."""
    unlocked = SwitchingConverter(headroom_needed_v=-5.1, lockout_v=0.0)
    free = dataclasses.replace(B, stages=(B.stages[0], unlocked, B.stages[2]))
    assert agree(free, rpm, amps, tmp_path) == ()
    assert operating_point(B, rpm, amps).states_at() == ("vin_low",)
