"""How sure a figure is where nothing was declared. Every number here is common practice, no source."""

from __future__ import annotations

from math import sqrt

from ledger.model.plan import MaterialKind

# A plus-or-minus bound with nothing said about its shape: every value within it is as likely.
BOUND_TO_U = 1.0 / sqrt(3.0)
# One step of a display is a bound of half a step either side.
STEP_TO_U = 1.0 / sqrt(12.0)

# A scale without a declared accuracy is taken to be good to one step; common practice, no source.
ACCURACY_STEPS = 1.0
# A reading on no named scale; common practice, no source.
UNNAMED_SCALE_SHARE = 0.005
# Half a gram of display and half a gram of accuracy, a kitchen scale; common practice, no source.
UNNAMED_SCALE_BOUND_KG = 0.001
# A metering pump by volume; common practice, no source.
PUMP_SHARE = 0.02

# Plus or minus, the mean of a lot nobody measured; common practice, no source.
LOT_SPREAD: dict[MaterialKind, float] = {
    MaterialKind.FABRIC: 0.04,
    MaterialKind.PREPREG: 0.04,
    MaterialKind.CORE: 0.12,
    MaterialKind.SOLID: 0.01,
}
OTHER_LOT_SPREAD = 0.10
# Plus or minus, the mean of a lot somebody measured; common practice, no source.
MEASURED_LOT_SPREAD = 0.01
# Standard, from place to place within one lot; common practice, no source.
SCATTER_WITHIN_LOT = 0.01
# Standard, the areal mass of a sheet from its own weighing; common practice, no source.
WEIGHED_SHEET = 0.003

# Standard, resin of hand layup against nominal, the same way for a whole cup; common practice, no source.
RESIN_HABIT = 0.12
# The same where the cup's account is closed by a weighed residue; common practice, no source.
RESIN_ACCOUNT = 0.04
# Grams stated with an entry, each on its own; common practice, no source.
STATED_GRAMS = 0.03
# Added, of the mass whose split over several lots or cups is not known; common practice, no source.
SPLIT_UNKNOWN = 0.10
# A figure by areal mass or length where no grams were taken; common practice, no source.
BY_THE_AREA = 0.10

# Plus or minus, a whole class of parts against its plan; common practice, no source.
CLASS_ALLOWANCE = 0.05
# Standard, the area, volume or length of one piece against its drawing; common practice, no source.
GEOMETRY_TOLERANCE = 0.01
