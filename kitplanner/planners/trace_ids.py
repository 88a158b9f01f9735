"""Which trace answers for which number: every numeric key of the effort, balance, bench, flow and rota answers.

The first word of an id tells who traces it: "bench_" `trace_bench` with the point, "rota_" `trace_rota` with the
answer, all others `trace` with the results.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

# Answer record -> key -> formula id.
TRACE_IDS: Mapping[str, Mapping[str, str]] = MappingProxyType(
    {
        "EffortRow": MappingProxyType(
            {
                "minutes_p10": "minutes_p10",
                "minutes_p50": "minutes_p50",
                "minutes_p90": "minutes_p90",
                "station_output_w": "row_output",
                "person_power_w": "row_power",
                "chain_fraction": "row_chain",
            }
        ),
        "ChargeCurve": MappingProxyType(
            {
                "minutes": "curve_minutes",
                "soc_p10_fraction": "curve_soc_range",
                "soc_p50_fraction": "curve_soc",
                "soc_p90_fraction": "curve_soc_range",
                "power_w": "curve_power",
            }
        ),
        "BalanceDay": MappingProxyType({"use_wh": "day_use", "made_wh": "day_made", "end_wh": "day_end"}),
        "BalanceHour": MappingProxyType({"use_wh": "hour_use", "made_wh": "hour_made"}),
        "BalanceDevice": MappingProxyType(
            {"use_wh": "device_use", "credit_wh": "device_credit", "covered_fraction": "device_covered"}
        ),
        "BalanceStore": MappingProxyType({"usable_wh": "store_usable"}),
        "BalanceStation": MappingProxyType(
            {
                "available_min": "station_time",
                "offered_min": "station_offered",
                "used_min": "station_used",
                "made_wh_per_day": "station_made",
                "human_wh_per_day": "station_human",
            }
        ),
        "BalancePerson": MappingProxyType(
            {"cap_min": "person_cap", "used_min": "person_used", "output_w": "station_output"}
        ),
        "CutClass": MappingProxyType({"need_wh": "cut_need", "have_wh": "cut_have", "covered_fraction": "cut_covered"}),
        "BalanceResult": MappingProxyType(
            {
                "coverage_fraction": "coverage",
                "need_wh": "need",
                "have_wh": "have",
                "short_wh_per_day": "short",
                "first_empty_day": "first_empty_day",
                "station_to_outlet_fraction": "station_to_outlet",
                "needed_min_per_day": "needed_min",
            }
        ),
        "FlowLoss": MappingProxyType({"wh_per_day": "flow_loss"}),
        "EnergyFlow": MappingProxyType(
            {
                "b_wh": "flow_b",
                "o_wh": "flow_o",
                "start_o_wh": "flow_start",
                "missing_o_wh": "flow_missing",
                "margin_o_wh": "flow_margin",
                "spare_o_wh": "flow_spare",
            }
        ),
        "BenchStage": MappingProxyType(
            {key: f"bench_stage_{key}" for key in ("in_w", "out_w", "in_v", "in_a", "out_v", "out_a", "loss_w")}
        ),
        "BenchPoint": MappingProxyType(
            {
                key: f"bench_{key}"
                for key in (
                    "rpm",
                    "human_w",
                    "torque_nm",
                    "stored_w",
                    "crank_to_usb_fraction",
                    "crank_to_battery_fraction",
                    "regulator_degc",
                    "meter_low_v",
                    "meter_high_v",
                    "plug_v",
                    "plug_a",
                )
            }
        ),
        "BenchSweep": MappingProxyType(
            {
                key: f"bench_{key}"
                for key in (
                    "rpm",
                    "human_w",
                    "stored_w",
                    "torque_nm",
                    "plug_v",
                    "plug_a",
                    "meter_v",
                    "regulator_w",
                    "regulator_degc",
                )
            }
        ),
        "RotaBout": MappingProxyType(
            {"start_min": "rota_bout_time", "end_min": "rota_bout_time", "output_wh": "rota_bout_energy"}
        ),
        "RotaCharge": MappingProxyType(
            {
                "start_min": "rota_charge_time",
                "end_min": "rota_charge_time",
                "count": "rota_charge_tickets",
                "first_ticket": "rota_charge_tickets",
                "energy_wh": "rota_charge_energy",
            }
        ),
        "UnmetUse": MappingProxyType({"start_min": "rota_unmet_row", "wh": "rota_unmet_row"}),
        "RotaObjective": MappingProxyType(
            {"value": "rota_aim_value", "bound": "rota_aim_bound", "gap": "rota_aim_gap"}
        ),
        "RotaSolution": MappingProxyType(
            {
                "slot_min": "rota_grid",
                "made_wh": "rota_made",
                "made_bound_wh": "rota_made_bound",
                "steps": "rota_search",
                "seconds": "rota_search",
            }
        ),
        "StoreLevels": MappingProxyType(
            {
                "slot_min": "rota_grid",
                "stores_wh": "rota_level",
                "devices_wh": "rota_level",
                "pooled_wh": "rota_pooled",
                "due_wh": "rota_pooled",
            }
        ),
        "RotaAnswer": MappingProxyType(
            {"unmet_wh": "rota_unmet", "unmet_margin_wh": "rota_unmet_margin", "wasted_wh": "rota_wasted"}
        ),
    }
)
# A band of the energy line is traced by the place it stands in.
FLOW_BAND_IDS: Mapping[str, str] = MappingProxyType(
    {
        "people_m": "flow_people",
        "stations_s": "flow_station",
        "sources_s": "flow_source",
        "devices_d": "flow_device",
    }
)
# Numbers that name a row and are no answer of their own.
ROW_NAMES = frozenset({"day", "hour", "priority", "unit"})
# Records whose numbers are gone when the answer is there.
PASSING = frozenset({"RotaProgress"})


def formula_of(answer: str, key: str) -> str:
    """Return the formula id behind a number of an answer; KeyError where it has none.

    Examples
    --------
    >>> formula_of("BalanceResult", "coverage_fraction"), formula_of("RotaBout", "output_wh")
    ('coverage', 'rota_bout_energy')
    """
    return TRACE_IDS[answer][key]
