"""Room: hydraulics. Water in a pipe: no maps, no files, plain numbers and arrays in SI units."""

from routing.hydraulics.air import barometric_head_m, standard_pressure_pa
from routing.hydraulics.ceiling import discharge_under, energy_discharge_m3s, suction_ceiling
from routing.hydraulics.collapse import allowed_underpressure_pa, collapse_pressure_pa, ovality_factor
from routing.hydraulics.friction import CRITICAL_REYNOLDS, darcy_factor
from routing.hydraulics.pipes import pe_modulus_pa, pe_pipe, steel_pipe, table_names, table_sizes
from routing.hydraulics.siphon import INTAKE, OUTLET, SUCTION, run_at, run_siphon
from routing.hydraulics.water import vapour_pressure_pa, water_at

__all__ = [
    "CRITICAL_REYNOLDS",
    "INTAKE",
    "OUTLET",
    "SUCTION",
    "allowed_underpressure_pa",
    "barometric_head_m",
    "collapse_pressure_pa",
    "darcy_factor",
    "discharge_under",
    "energy_discharge_m3s",
    "ovality_factor",
    "pe_modulus_pa",
    "pe_pipe",
    "run_at",
    "run_siphon",
    "standard_pressure_pa",
    "steel_pipe",
    "suction_ceiling",
    "table_names",
    "table_sizes",
    "vapour_pressure_pa",
    "water_at",
]
