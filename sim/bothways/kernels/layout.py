"""How a mechanism lies in two flat tables, so that one compiled function serves every mechanism.

`ints` (uint32) and `floats` (float64) hold the named arrays of INTS and FLOATS one after another; `work` (float64)
holds those of WORK and belongs to one caller at a time. ints[0:] starts with the sizes, then the offsets: array k
of a list spans offset k to offset k + 1. `view` is the one way to them.
"""

from collections.abc import Sequence

from ..compiled import compiled, span_at

SIZES = ("SPECIES", "REACTIONS", "EXPRESSIONS", "TERMS", "BODIES", "FALL_OFFS", "GROUPS", "LONG", "BLOCK", "CURVES",
         "COLUMNS", "RESPONSES", "DILUTED", "LUMPS", "LUMP_ENTRIES", "COMPLEXES")
(SPECIES, REACTIONS, EXPRESSIONS, TERMS, BODIES, FALL_OFFS, GROUPS, LONG, BLOCK, CURVES, COLUMNS, RESPONSES, DILUTED,
 LUMPS, LUMP_ENTRIES, COMPLEXES) = range(len(SIZES))

INTS = (
    "range_start",      # (S + 1) first temperature range of each species, and behind them of each transition state
    "oscillator_start",  # (S + 1) first oscillator of each of these
    "ladder_start",     # (S + 1) first sum over levels of each
    "level_start",      # (ladders + 1) first level of each sum
    "reactant0", "reactant1",  # (R) first and second reactant molecule, N where there is none
    "product0", "product1",  # (R) likewise products
    "long_reaction",    # (m) further molecules of long sides: their reaction,
    "long_species",     # (m) species,
    "long_side",        # (m) and side, 0 reactants 1 products
    "term_reaction",    # (T) reaction of each term; the first R terms are the reactions' first ones
    "body_term",        # (B) terms multiplied by the concentration of a partner
    "body_group",       # (B) and its group
    "fall_term",        # (L) terms in fall-off after Lindemann or Troe
    "fall_low",         # (L) expression of their low-pressure limit
    "fall_group",       # (L) partner group
    "curve_term",       # (U) terms on any other curve between two limits
    "curve_low",        # (U) expression of their low-pressure limit
    "curve_group",      # (U) partner group
    "curve_width",      # (U) width rule
    "curve_activated",  # (U) 1: the product channel of a chemically activated reaction
    "table_term",       # (P) terms with a pressure table
    "table_start",      # (P + 1) their first pressure
    "node_start",       # (nodes + 1) first row at each pressure
    "row_expression",   # expression of each row
    "series_term",      # (H) terms with a Chebyshev series
    "series_rows",      # (H) number of powers in 1/T
    "series_start",     # (H + 1) first column (power in ln p)
    "column_start",     # (COLUMNS + 1) first coefficient of each column
    "lump_term",        # (L) lumped terms
    "lump_start",       # (L + 1) their first entry: a species that has a part in the rate
    "lump_species",     # (E) species of each entry
    "lump_diluted",     # (L) place of their reaction among the diluted ones, from 1 on; 0 if it is none
    "adsorbed_start",   # (L + 1) their first adsorbed species
    "adsorbed_species",  # (E') species in adsorption groups
    "adsorbed_expression",  # (E') expression of their adsorption constant
    "plain_term",       # mass-action terms of the reactions that have lumped ones
    "complex_term",     # (K) terms with a transition state
    "complex_start",    # (K + 1) first of the reactant molecules that make it
    "complex_molecule",  # their species
    "group_start",      # (G + 1) partner groups: first named species
    "group_species",    # named species of the groups
    "changed_species",  # (K) species that reactions change, in order of how many do,
    "changed_start",    # (K + 1) and where these stand
    "changed_reaction",  # the reactions, as often as they make a molecule, R + 1 further on where they take one; padded with R
    "block_start",      # (N + 1) columns of the species block of the Jacobian
    "block_row",        # its rows
    "target",           # (16 R) where the partials by the four molecules go in `block`, four rows each
    "response_start",   # (2 P + 1) responses of a species to the partners of a group: terms that make, that take it
    "response_term",    # these terms, padded with T
    "extra_place",      # places in `block` of what else adds to it,
    "extra_source",     # and the partials
    "diluted_reaction",  # (Q) reactions that change the amount, where activities are mole fractions
)
FLOATS = (
    "range_top",        # upper temperature of each range [K]
    "range_row",        # (9 per range) coefficients
    "oscillator",       # (2 per oscillator) θ [K], degeneracy
    "level",            # (2 per level) θ [K], weight
    "reduction",        # (2 S) element terms taken off g/RT: alpha [K], beta [-]
    "log_A", "power", "theta",  # (X) expressions
    "term_sign",        # (T)
    "fall_parameter",   # (4 L) broadening
    "curve_parameter",  # (8 U) centre and factor of F
    "node_log_p",       # (nodes) ln p
    "row_sign",         # (rows)
    "series_window",    # (4 H) 1/T [1/K] and ln p at the low and the high end
    "column_coefficient",  # column by column
    "lump_share",       # (L) 1/σ
    "lump_nu",          # (E) net stoichiometric number
    "lump_power",       # (E) power common to both directions
    "adsorbed_power",   # (E') of the concentration in the adsorption group
    "adsorption_power",  # (L) of the adsorption group
    "complex_wigner",   # (K) h c ν‡/k_B of Wigner's tunnelling [K], 0 without
    "group_default",    # (G) efficiency of species not named
    "group_excess",     # efficiency of the named ones above the default
    "extra_weight",     # weights of the partials named by extra_source
    "amount_change",    # (Q) change of the amount in these reactions
    "standard",         # (2) s and e of the standard concentration s·T^-e [mol/m3]: p°/R and 1 of a gas, c° and 0
)
WORK = (
    "seen",             # (5) see SEEN_…: what the parts of this table stand for
    "active",           # (9 N) coefficients in force, power by power
    "gibbs", "enthalpy", "heat_capacity", "heat_capacity_slope",  # (N) g/RT reduced, h/RT, cp/R, T dcp/dT/R
    "log_scale", "log_k", "centre_exponent", "spare_exponent",  # of E (N + 1), of expressions (X), of F_cent (3 L, one
    "scale", "k_limit", "centre_part", "spare_part",            # kind after another), with room; their exponentials
    "inverse_scale",    # (N + 1) 1/E
    "scale_slope",      # (N + 1) d ln E/dT
    "k_slope",          # (X) d ln k/dT
    "reactant_scale",   # (R) product of E over the reactants
    "reverse_slope",    # (R) d ln (ΠE_reac/ΠE_prod)/dT
    "log_centre", "spare_log_centre", "log_centre_slope",  # (L) log10 F_cent, with room, and its slope
    "centre", "spare_centre",  # (L) F_cent, with room
    "fall_ratio", "fall_log_ratio",  # (L) k_0/k_inf and its log10, at T
    "fall_share",       # (L) scratch: k_inf, then k/k_0
    "fall_partner", "fall_reduced",  # (L) [M] and log10 of the reduced pressure
    "fall_by_reduced", "fall_by_centre",  # (L) d log10 F by log10 of the reduced pressure and of F_cent
    "log_broadening", "spare_log_broadening", "broadening", "spare_broadening",  # (L) F, with room
    "curve_centre", "curve_centre_slope",  # (U) log10 of the centre and its slope
    "curve_factor",     # (U) ln of what stands beside it
    "complex_gibbs", "complex_enthalpy", "complex_heat_capacity", "complex_heat_capacity_slope",  # (K) as of the species
    "pressure",         # (1) of the gas [Pa], kept where a law asks for it
    "column", "column_slope",  # (COLUMNS) Chebyshev sums over the powers in 1/T, and their slopes
    "activity",         # (N + 1) a = c/E
    "partner", "log_partner",  # (G) partner concentrations and their logarithms
    "k",                # (T) forward rate constants of the terms, partner included
    "k_by_T", "k_by_M",  # (T) their derivatives; of laws of pressure by_M is by the total C
    "k_total", "k_total_by_T",  # (R)
    "forward", "reverse",  # (R) Πa over the reactants and over the products
    "net",              # (2 R + 1) net rates, a zero, and the net rates with the other sign
    "bare",             # (R) ΠE_reac (Πa_reac - Πa_prod): the net rate for k one
    "net_by_T",         # (2 R + 1) likewise
    "lump_bare",        # (L) net rate of each lumped term for k one
    "lump_forward", "lump_reverse",  # (L) its one-way rates
    "omega",            # (N) production rates
    "omega_by_T",       # (N)
    "dilution",         # (Q + 1) what the total concentration does to their reverse rates, and 1/C
    "partial",          # (4 R + m + T + 1 + P + E + E' + Q) by molecules, further ones, partners; 0; responses; lumped; dilution
    "block",            # (nb + N + 16) species block of the Jacobian, dω/dC, and places for what is not wanted
    "concentration",    # (N) for which the rates stand
    "energy",           # (N) molar energy or enthalpy over RT
    "border_column",    # (N) scratch of the vessel equations
)

SEEN_T, SEEN_SLOPES, FITS_FROM, FITS_TO, SEEN_TOTAL = range(5)
"""Places in `seen`: T of the thermal parts, T of their slopes, range of T of the coefficients in force, total of the
rates. Each part is kept while what it stands for stays."""
PAD = 4
"""Lists that are summed are padded to a multiple of this, so that their loops have no odd ends."""
NOT_WANTED = 16
"""Places behind the block: one for each pair of a molecule and a row, so that no addition waits for another's."""

_INT_OFFSETS = len(SIZES)
_FLOAT_OFFSETS = _INT_OFFSETS + len(INTS) + 1
_WORK_OFFSETS = _FLOAT_OFFSETS + len(FLOATS) + 1
HEADER = _WORK_OFFSETS + len(WORK) + 1


def offset_slot(names: Sequence[str], name: str) -> int:
    """The place in `ints` where the offset of a named array stands."""
    base = {INTS: _INT_OFFSETS, FLOATS: _FLOAT_OFFSETS, WORK: _WORK_OFFSETS}[tuple(names)]
    return base + tuple(names).index(name)


view = span_at
"""view(array, ints, slot): the named array whose offset stands at `slot`, as a view that costs next to nothing: no bounds
are asked for and nothing is counted, so `array` must outlive it. A compiled function of its own would be compiled anew for
every slot."""


@compiled
def put(values, out):
    """out_i = values_i for as many as there are values. An assignment to a slice would do the same, but bring with it all
    that it takes to say in words that lengths differ."""
    for i in range(values.size):
        out[i] = values[i]
