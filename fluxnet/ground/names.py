"""The one table of diagnostic names.

A name states the pattern found and never changes its meaning. Each has a severity, a
headline for lists, and the two texts of ``fluxnet explain``: why it matters, and what to do.
"""

from __future__ import annotations

from enum import Enum

__all__ = ["Name", "Severity"]


class Severity(Enum):
    """How grave a finding is.

    ``ERROR``: no answer can be computed, or it would be wrong. ``WARNING``: an answer
    exists but one would not defend it. ``NOTE``: an assumption was made for the user.
    """

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"

    @property
    def rank(self) -> int:
        """0 for errors, 1 for warnings, 2 for notes."""
        return list(Severity).index(self)


_E, _W, _N = Severity.ERROR, Severity.WARNING, Severity.NOTE


class Name(Enum):
    """Every diagnostic name: ``Name.DEAD_END.value`` is ``"dead-end"``."""

    severity: Severity
    headline: str
    why: str
    remedy: str

    def __new__(cls, name: str, severity: Severity, headline: str, why: str, remedy: str) -> Name:
        """Make the member; the enumeration's value is the name alone."""
        member = object.__new__(cls)
        member._value_ = name
        member.severity = severity
        member.headline = headline
        member.why = why
        member.remedy = remedy
        return member

    # --- files -----------------------------------------------------------------------
    FILE_MISSING = (
        "file-missing", _E, "a file that was named does not exist",
        "Nothing can be read.", "Correct the path; it is taken relative to the folder you are in.")
    NOT_A_FILE = (
        "not-a-file", _E, "the path names a folder",
        "A model and a rates table are single files.", "Name the file inside the folder.")
    BINARY_FILE = (
        "binary-file", _E, "the file is not text",
        "Models are plain text; a workbook can be given only as a rates table.",
        "Save it as plain text (UTF-8).")
    WRONG_KIND_OF_FILE = (
        "wrong-kind-of-file", _E, "a table stands where a model is expected, or the other way",
        "A model lists reactions, a table measured rates; each command says which it takes.",
        "`fluxnet check model.flux`, `fluxnet closure rates.csv`, "
        "`fluxnet solve model.flux rates.csv`.")
    EMPTY_FILE = (
        "empty-file", _E, "the file holds nothing",
        "There is nothing to compute.", "Start from `fluxnet new NAME`.")
    FILE_TOO_LONG = (
        "file-too-long", _E, "the file has more lines than a model is expected to have",
        "It is probably the wrong file; reading it would take long.",
        "If it is meant, repeat the command with --large.")
    WRONG_ENCODING = (
        "wrong-encoding", _N, "the text was not UTF-8 and was read as Latin-1",
        "Letters beyond ASCII may have been read as others.", "Save the file as UTF-8.")

    # --- words on a line -------------------------------------------------------------
    UNREADABLE_LINE = (
        "unreadable-line", _E, "the line is no statement of the language",
        "One statement stands on one line; what cannot be read is left out of the model.",
        "Compare with `fluxnet manual language`.")
    UNKNOWN_STATEMENT = (
        "unknown-statement", _E, "the line begins with a word that starts no statement",
        "Only the words of the language can start a line.", "Use the nearest word that is shown.")
    BAD_INDENTATION = (
        "bad-indentation", _E, "the line is indented under nothing, or not as its block is",
        "Blocks are told by indentation.", "Indent all lines of a block alike.")
    DECIMAL_COMMA = (
        "decimal-comma", _E, "a number is written with a decimal comma",
        "In a reaction list a comma separates names.", "Write a decimal point.")
    GLUED_NUMBER = (
        "glued-number", _E, "a coefficient touches the name behind it",
        "Digits glued to letters belong to the name (3PG is a name).",
        "Put a blank between coefficient and name.")
    FRACTION_COEFFICIENT = (
        "fraction-coefficient", _E, "a coefficient is written as a fraction outside brackets",
        "Outside brackets a coefficient is a decimal number, a parameter or `?`.",
        "Write the expression in brackets, (1/2), or as a decimal.")
    STARRED_COEFFICIENT = (
        "starred-coefficient", _E, "a product stands outside brackets",
        "Outside brackets a coefficient is a decimal number, a parameter or `?`.",
        "Write the expression in brackets: (2*PO) ATP.")
    WRONG_ARROW = (
        "wrong-arrow", _E, "the sign between the two sides is no arrow of the language",
        "`->` goes one way, `<->` both ways.", "Write -> or <->.")
    MISSING_PLUS = (
        "missing-plus", _E, "two species stand side by side without `+`",
        "The line cannot be read without guessing.", "Write a + between the species.")
    MISSING_COMMA = (
        "missing-comma", _E, "two names stand side by side in a declaration without a comma",
        "The second name would be read as the formula of the first.",
        "Write a comma between the names.")
    COEFFICIENT_NOT_POSITIVE = (
        "coefficient-not-positive", _E, "a coefficient is zero or negative",
        "The side of the arrow says what is used and what is made.",
        "Move the species to the other side, or take it out.")

    # --- names -----------------------------------------------------------------------
    UNKNOWN_SPECIES = (
        "unknown-species", _E, "a reaction or limit names a species that is not declared",
        "A misspelt name would open a hole in the balances.",
        "Declare it, or write the nearest declared name.")
    CASE_DIFFERS = (
        "case-differs", _E, "a name differs from a declared one only in case",
        "Case counts; two such names would be mistaken for each other.", "Write it as declared.")
    DECLARED_TWICE = (
        "declared-twice", _E, "one name is declared twice",
        "A species has one role, a parameter one value, a reaction one line.",
        "Take one of the two away, or rename it.")
    RESERVED_NAME = (
        "reserved-name", _E, "a word with a fixed meaning is used as a name",
        "`nothing` is the empty side and `mu` the specific growth rate.", "Choose another name.")
    UNKNOWN_PARAMETER = (
        "unknown-parameter", _E, "an expression names a parameter that is not declared",
        "The coefficient has no value.", "Declare it: parameter NAME = 1.0.")
    UNKNOWN_COMPARTMENT = (
        "unknown-compartment", _E, "`add to` names a compartment that does not exist",
        "The reactions would stand nowhere.", "Write the nearest compartment's name.")
    REACTION_OUTSIDE = (
        "reaction-outside", _E, "a reaction stands in no compartment",
        "The ledger and the net equations are made by compartment.",
        "Put it under a `compartment NAME` line and indent it.")
    EMPTY_COMPARTMENT = (
        "empty-compartment", _W, "a compartment holds no reaction",
        "It will show up empty in every table.", "Add its reactions, or take it away.")
    EMPTY_REACTION = (
        "empty-reaction", _E, "both sides of a reaction are nothing",
        "It does nothing.", "Write what it uses and makes.")
    SAME_ON_BOTH_SIDES = (
        "same-on-both-sides", _W, "a species stands on both sides of a reaction",
        "Only the difference counts in every balance.", "Write the difference on one side.")
    NO_REACTION = (
        "no-reaction", _E, "the model has no reaction",
        "There is nothing to balance.", "Add a compartment with reactions.")

    # --- formulas --------------------------------------------------------------------
    BAD_FORMULA = (
        "bad-formula", _E, "a formula cannot be read",
        "Without a composition nothing can be balanced.", "Write elements with counts: C6H12O6.")
    UNKNOWN_ELEMENT = (
        "unknown-element", _E, "a formula holds a letter that is no element",
        "Its balance would be meaningless.", "Check upper and lower case: Co is cobalt, CO is not.")
    FORMULA_NEEDED = (
        "formula-needed", _E, "a species that crosses the boundary has no formula",
        "Its carbon and electrons could not be counted.",
        "Write the formula behind the name, or a name of the catalogue (`fluxnet catalogue`).")
    FORMULA_DIFFERS = (
        "formula-differs", _E, "a formula contradicts the catalogue's",
        "They may differ only by water and protons.",
        "Take the catalogue's formula, or another name for another compound.")
    BIOMASS_WITHOUT_CARBON = (
        "biomass-without-carbon", _E, "the biomass formula holds no carbon",
        "Growth could not be counted.", "Write one C-mol: CH1.8O0.5N0.2.")
    ASH_ASSUMED = (
        "ash-assumed", _N, "no ash content is given; 0 is taken",
        "Dry weight includes ash: 8 % ash moves every specific rate's mass basis by 8 %.",
        "Write `ash 8 %` behind the biomass formula.")
    BAD_ASH = (
        "bad-ash", _E, "an ash content cannot be used",
        "It is a share of dry weight.", "Write `ash 8 %`, or as a fraction: `ash 0.08`.")
    BAD_CARGO = (
        "bad-cargo", _E, "what a carrier carries cannot be read",
        "Its balance decides the proportions of the compartments.",
        "Write `carries energy`, `carries 2 electrons` or `carries C2H2O`.")

    # --- parameters ------------------------------------------------------------------
    BAD_PARAMETER = (
        "bad-parameter", _E, "a parameter line cannot be used",
        "Value, sd and range must fit together.", "Write: parameter PO = 1.4 ± 0.2 in [0.5, 2.5].")
    OUTSIDE_RANGE = (
        "outside-range", _E, "a parameter's value lies outside its range",
        "Value and range contradict each other.", "Correct one of the two.")
    DIVISION_BY_ZERO = (
        "division-by-zero", _E, "an expression divides by zero",
        "The coefficient has no value.", "Correct the expression or the parameter's value.")
    UNUSED_PARAMETER = (
        "unused-parameter", _W, "no coefficient uses a parameter",
        "Its value and error have no effect.", "Use it, or take it away.")

    # --- balances --------------------------------------------------------------------
    UNBALANCED_LINE = (
        "unbalanced-line", _E, "a reaction does not balance",
        "Every flux computed with it would create or destroy matter or electrons.",
        "Correct the coefficient that is named, or write ? for it.")
    ROUNDING_GAP = (
        "rounding-gap", _N, "a reaction balances only within the rounding of its numbers",
        "The gap is small, but it enters every closure.",
        "Write ? for one coefficient: it is then solved exactly.")
    BALANCE_NOT_CHECKED = (
        "balance-not-checked", _N, "a balance of a reaction could not be checked",
        "A species without a composition, or an element without a reference state, is in it.",
        "Give the formula.")
    COEFFICIENT_FREE = (
        "coefficient-free", _E, "the balances leave a ? coefficient free",
        "There are more unknowns than balances that see them.", "Write one of them as a number.")
    COEFFICIENT_CONTRADICTS = (
        "coefficient-contradicts", _E, "no value of the ? coefficients balances the reaction",
        "The numbers that are given already contradict one another.",
        "Write another coefficient as ?, or correct one.")
    COEFFICIENT_NEGATIVE = (
        "coefficient-negative", _E, "a ? coefficient comes out negative",
        "The species belongs on the other side.", "Move it to the other side of the arrow.")
    DIVIDES_IN_RANGE = (
        "divides-by-zero-in-range", _W,
        "a coefficient divides by zero within the range of its parameters",
        "Towards that place it grows beyond all bounds, and beyond it has the other sign: the "
        "errors of the parameters cannot be passed on.",
        "Narrow the range or the sd, or write the line per another amount.")
    COEFFICIENT_CHANGES_SIGN = (
        "coefficient-changes-sign", _W, "a coefficient changes its sign within a parameter's range",
        "At one end of the range the species would be used, at the other made.",
        "Narrow the range, or correct the line.")
    COEFFICIENT_ZERO = (
        "coefficient-zero", _N, "a ? coefficient comes out as zero",
        "The species takes no part in the reaction.", "Take it out.")
    WIDE_COEFFICIENTS = (
        "wide-coefficients", _E, "coefficients of one reaction differ by more than ten decades",
        "Floating-point answers lose their digits at such a spread: fluxes would be wrong.",
        "Write the reaction per another amount, or check the numbers.")
    BEYOND_PRECISION = (
        "beyond-precision", _E, "numbers of the input lie too far apart to be computed with",
        "Floating-point numbers hold sixteen digits: the small ones are lost beside the large.",
        "Write the reactions per another amount, or check the numbers.")

    # --- limits ----------------------------------------------------------------------
    UNKNOWN_LIMIT = (
        "unknown-limit", _E, "a limit is set on a thing that the model does not have",
        "It would have no effect.", "Name a boundary species, mu, a reaction or a ratio.")
    LIMIT_REPEATED = (
        "limit-repeated", _E, "two limits are set on one quantity and direction",
        "Which one holds would depend on their order.", "Keep one.")
    LIMIT_NEEDS_DIRECTION = (
        "limit-needs-direction", _E, "a limit on an exchange species says neither in nor out",
        "The species can go either way.", "Write `limit CO2 in <= 1` or `limit CO2 out <= 1`.")
    LIMIT_AGAINST_ROLE = (
        "limit-against-role", _E, "a limit's direction contradicts the species' role",
        "A substrate is only taken up and a product only released.",
        "Correct the direction, or declare the species as exchange.")
    LIMIT_AGAINST_DIRECTION = (
        "limit-against-direction", _E, "a limit makes an irreversible reaction run backwards",
        "Its flux, positive from left to right, is never negative.",
        "Write the reaction with <->, or correct the number.")
    LIMIT_WITHOUT_EFFECT = (
        "limit-without-effect", _N, "a negative lower limit on an irreversible reaction",
        "Its flux is never negative, so that the limit holds nothing back.",
        "Take the limit away, or write the reaction with <->.")
    CONTRADICTORY_LIMITS = (
        "contradictory-limits", _E, "two limits leave no room between them",
        "No flux can meet both.", "Correct one of them.")
    BAD_LIMIT = (
        "bad-limit", _E, "a limit's numbers make no sense",
        "Magnitudes are not negative and an sd is positive.", "Correct the number.")

    # --- variants and files used ------------------------------------------------------
    UNKNOWN_VARIANT = (
        "unknown-variant", _E, "a variant is named that the model does not have",
        "There is nothing to apply.", "Write the nearest variant's name.")
    VARIANT_CIRCLE = (
        "variant-circle", _E, "variants build on one another in a circle",
        "None of them has a beginning.", "Take one `from` away.")
    VARIANT_CLASH = (
        "variant-clash", _E, "two variants that are combined set one thing differently",
        "In a combination order has no meaning.", "Combine others, or make a variant for it.")
    VARIANT_TARGET = (
        "variant-target", _E, "a variant changes a thing that the model does not have",
        "The change would have no effect.", "Write the nearest name.")
    STILL_USED = (
        "still-used", _E, "a variant drops a thing that something else still uses",
        "What is left would name a thing that is not there.",
        "Drop what uses it as well, or keep it.")
    VARIANT_EMPTY = (
        "variant-empty", _W, "a variant changes nothing",
        "It gives the same answers as base.", "Write its changes, or take it away.")
    USE_MISSING = (
        "use-missing", _E, "a used file does not exist",
        "A part of the model is missing.", "Correct the path; it is relative to the using file.")
    USE_CIRCLE = (
        "use-circle", _E, "files use one another in a circle",
        "None of them has a beginning.", "Take one `use` away.")
    USE_OUTSIDE = (
        "use-outside", _E, "a used file lies outside the model's folder",
        "A model that is passed on must not reach into foreign folders.",
        "Copy the file beside the model, or repeat with --allow-use PATH.")
    BASIS_DIFFERS = (
        "basis-differs", _E, "a used file is written in another basis",
        "Its limits would be read in the wrong unit.", "Write both in one basis.")
    UNKNOWN_BASIS = (
        "unknown-basis", _E, "the basis is no unit of a rate",
        "Rates would have no unit.", "Write `basis mmol/g/h`.")

    # --- acceptances -----------------------------------------------------------------
    ACCEPT_UNKNOWN = (
        "accept-unknown", _E, "`accept` names no diagnostic",
        "Nothing would be silenced.", "`fluxnet explain` lists the names.")
    ACCEPT_UNUSED = (
        "accept-unused", _W, "an acceptance silences nothing",
        "It hides the next fault that comes to stand there.", "Take it away.")

    # --- what the checker finds in the network ------------------------------------------
    DEAD_END = (
        "dead-end", _W, "an inside species is only made or only used",
        "At steady state no flux can pass through it.",
        "Add the reaction that uses or makes it, or declare it as a boundary species.")
    CUT_OFF = (
        "cut-off", _W, "a part of the network hangs together with no substrate",
        "No flux can reach it.", "Connect it, or take it away.")
    UNUSED_SPECIES = (
        "unused-species", _W, "no reaction uses a declared species",
        "Often a misspelt name elsewhere.", "Use it, or take it away.")
    DUPLICATE_REACTION = (
        "duplicate-reaction", _W, "two reactions are the same",
        "Only their sum can ever be told.", "Keep one.")
    PARALLEL_REACTIONS = (
        "parallel-reactions", _W, "two reactions do the same in multiples or opposite directions",
        "Rates alone cannot tell them apart, and opposite ones can run in a circle.",
        "Keep one, or make it reversible.")
    BLOCKED_REACTION = (
        "blocked-reaction", _W, "a reaction can carry no flux",
        "Something before or behind it is closed.", "Open what the message names.")
    ENERGY_FROM_NOTHING = (
        "energy-from-nothing", _E, "the network makes an energy carrier without taking anything up",
        "Every yield and every maintenance number would be wrong.",
        "Correct one of the reactions of the loop.")
    ELECTRONS_FROM_NOTHING = (
        "electrons-from-nothing", _E, "the network loads an electron carrier from nothing",
        "Electrons are conserved.", "Correct one of the reactions of the loop.")
    BIOMASS_FROM_NOTHING = (
        "biomass-from-nothing", _E, "the network grows without taking anything up",
        "Matter is conserved.", "Correct one of the reactions shown.")
    PRODUCT_FROM_NOTHING = (
        "product-from-nothing", _E, "the network releases a species without taking anything up",
        "Matter is conserved.", "Correct one of the reactions shown.")
    IMPLIED_COMPOSITION = (
        "implied-composition", _N, "the composition of a species was worked out from its reactions",
        "The model gives no formula for it.", "Give the formula, so that the lines are checked.")
    IMPOSSIBLE_COMPOSITION = (
        "impossible-composition", _E, "no composition of a species balances all its reactions",
        "The reactions contradict one another.", "Correct one of the reactions shown.")
    TOO_MUCH_ENERGY = (
        "too-much-energy", _W, "more ATP is made per substrate than its conversion can pay for",
        "At 45 kJ per mol ATP (common practice) the conversion gives less.",
        "Look for a coefficient of ATP that is too large.")
    NO_SUBSTRATE = (
        "no-substrate", _W, "nothing with carbon can be taken up",
        "No flux can run.", "Declare a substrate.")

    PACKAGE_MISSING = (
        "package-missing", _E, "an optional package that is needed is not installed",
        "A workbook is read by a package of its own.", "pip install \"fluxnet[sheets]\".")
    UNKNOWN_SHEET = (
        "unknown-sheet", _E, "a sheet is asked for that the workbook does not have",
        "There is nothing to read.", "Name one of the sheets shown.")

    # --- rates tables ------------------------------------------------------------------
    UNREADABLE_CELL = (
        "unreadable-cell", _E, "a cell does not hold what its column should",
        "It is never dropped in silence.", "Correct the cell, or leave it blank: not measured.")
    AMBIGUOUS_NUMBER = (
        "ambiguous-number", _E, "a number can be read in two ways",
        "A comma may be a decimal sign or a thousands sign: a factor of 1000.",
        "Say which: --decimal comma or --decimal point.")
    MISSING_COLUMN = (
        "missing-column", _E, "the table lacks a column",
        "The rows cannot be understood without it.",
        "A long table has species, direction, rate, sd, unit; a wide one `glucose in [mmol/g/h]`.")
    UNKNOWN_QUANTITY = (
        "unknown-quantity", _E, "a row names a thing that neither model nor catalogue knows",
        "Its carbon and electrons could not be counted.", "Write the nearest name.")
    RATE_AGAINST_ROLE = (
        "rate-against-role", _E, "a measured rate's direction contradicts the species' role",
        "A substrate is only taken up and a product only released.",
        "Correct the direction, or declare the species as exchange.")
    BAD_DIRECTION = (
        "bad-direction", _E, "a direction is neither in nor out",
        "Uptake and release are told apart by word, never by sign.", "Write in or out.")
    NEGATIVE_RATE = (
        "negative-rate", _E, "a rate is negative",
        "Rates are magnitudes; the direction is told by word, and a minus often only marks the "
        "uptake.",
        "Write it without the minus, with the direction that is meant.")
    NEGATIVE_SD = (
        "negative-sd", _E, "a standard deviation is negative",
        "It has no meaning.", "Correct it; 0 means exact.")
    SD_LARGER_THAN_RATE = (
        "sd-larger-than-rate", _W, "a standard deviation without % is larger than its rate",
        "Where per cent were meant, the rate has almost no weight in any test or fit.",
        "Write 5 %, or [%] in the title of the sds; keep it where the rate may be 0.")
    NOT_A_NUMBER = (
        "not-a-number", _E, "a cell holds NaN or infinity",
        "It would spread to every answer.", "Leave it blank: not measured.")
    UNKNOWN_UNIT = (
        "unknown-unit", _E, "a unit cannot be read",
        "A factor would be guessed.", "`fluxnet manual units` lists what can be written.")
    WRONG_UNIT = (
        "wrong-unit", _E, "a unit is of the wrong kind for its quantity",
        "A length is no rate.", "Write a unit of a rate.")
    ROW_REPEATED = (
        "row-repeated", _E, "two rows give one quantity of one run",
        "Which one holds would depend on their order.",
        "Keep one, average them, or give the second run another name.")
    MIXED_BASIS = (
        "mixed-basis", _E, "one run mixes amounts, volumetric and specific rates",
        "They can be compared only on one basis.", "Convert, or split the run in two.")
    NO_MEASURED_RATE = (
        "no-measured-rate", _E, "a run holds no measured rate",
        "There is nothing to test.", "Fill in at least one rate.")
    UNKNOWN_RUN = (
        "unknown-run", _E, "a run is asked for that the table does not have",
        "There is nothing to compute.", "Name one of the runs shown.")
    BAD_COVARIANCE = (
        "bad-covariance", _E, "the shared errors make no possible covariance",
        "It must be symmetric, with no negative variance in any direction.",
        "Correct the correlation or the shared error.")
    SD_ASSUMED = (
        "sd-assumed", _N, "a rate has no sd; one was assumed",
        "Every verdict depends on it.", "Give the sd of each rate, absolute or in %.")
    SHARED_ERROR_ASSUMED = (
        "shared-error-assumed", _N, "specific rates are taken as independent of one another",
        "All were divided by one biomass value, whose error they share.",
        "Add a line `shared error biomass 4 %` above the table.")
    TABLE_UNDERSTOOD = (
        "table-understood", _N, "how a table was read", "What is guessed is said.",
        "Overrule it with --decimal, --separator or --sheet.")
    BIOMASS_ASSUMED = (
        "biomass-assumed", _N, "a table names biomass, and nothing says its formula",
        "CH1.8O0.5N0.2 without ash is taken; its nitrogen and ash decide several per cent.",
        "Write a line `biomass X CH1.8O0.5N0.2 ash 8 %` above the table, or give the model.")
    NOT_IN_MODEL = (
        "not-in-model", _W, "a measured species is not in the model",
        "Closure counts it by the catalogue's formula; no flux of the model can make or use it.",
        "Declare it in the model, or leave its row out.")
    FREE_ACID_TAKEN = (
        "free-acid-taken", _N, "grams of an acid or its ion are taken as grams of the free acid",
        "The sodium salt is heavier by up to 40 %.",
        "Write `g as ion`, `g as sodium salt` or `g monohydrate` in the unit.")
    LIMIT_LEFT_OUT = (
        "limit-left-out", _N, "a limit or measured value does not apply to a run in amounts",
        "It is written per hour; the run has no time.", "Give the run as rates.")
    LIMIT_REPLACED = (
        "limit-replaced", _N, "a row of the table replaces a measured value of the model",
        "One quantity has one measured value.", "Take the limit away if that is not meant.")

    # --- raw data of a cultivation ---------------------------------------------------
    NO_BIOMASS_DATA = (
        "no-biomass-data", _E, "there is no dry weight, and no optical density with a calibration",
        "Without biomass there is no specific rate; optical density alone is no mass.",
        "Add a column of dry weight, or pairs of optical density and dry weight.")
    BROTH_UNKNOWN = (
        "broth-unknown", _E, "nothing says how much broth there was",
        "Amounts are concentration times volume.",
        "Give the volume or mass at inoculation as a setting.")
    FLOW_WITHOUT_REFERENCE = (
        "flow-without-reference", _E, "a gas flow in litres has no reference temperature",
        "Litres at 0 °C and at 20 °C differ by 7.3 %, and every gas rate with them.",
        "Write the unit as NL/h (0 °C) or give the reference temperature as a setting.")
    IMPOSSIBLE_GAS = (
        "impossible-gas", _E, "gas fractions lie below 0 or above 100 %",
        "No gas is like that; the unit or the column is wrong.", "Correct the unit or the column.")
    PHASE_WITHOUT_SAMPLES = (
        "phase-without-samples", _E, "a phase holds fewer samples than a rate needs",
        "A rate is a difference over time.", "Make the phase longer, or leave it out.")
    STREAM_IMPOSSIBLE = (
        "stream-impossible", _E, "streams leave no broth, or their flow is unknown",
        "Every amount rests on the account of the broth.", "Correct the stream that is named.")
    NOT_STEADY = (
        "not-steady", _W, "a chemostat still changes over its last residence times",
        "What piles up or is washed out counts as made or used.",
        "Wait for five residence times, or choose a later stretch.")
    BEYOND_CALIBRATION = (
        "beyond-calibration", _W, "optical densities lie outside the calibrated range",
        "Dense broth reads too low, and by how much only a calibration tells.",
        "Dilute before reading, or calibrate further.")
    RATIO_UNUSABLE = (
        "ratio-unusable", _W, "RQ is not known: the oxygen difference is below three of its sds",
        "A ratio over what cannot be told from nothing says nothing.",
        "Lower the gas flow, calibrate on the inlet gas, or wait for more biomass.")
    ANALYSER_DRIFTS = (
        "analyser-drifts", _W, "an analyser drifted while nothing grew",
        "The drift may have gone on, and it looks like respiration.",
        "Calibrate once more at the end, and let the analyser warm up before.")
    TOTALISER_RESET = (
        "totaliser-reset", _W, "a total falls: it was set back, or a bottle was changed",
        "Taken as it stands it would be a negative flow.",
        "Nothing, where the reset was meant: the total goes on from there.")
    RATE_NOT_CONSTANT = (
        "rate-not-constant", _W, "samples scatter about one rate by more than their errors",
        "The rate changed in this phase, or an error is larger than given; its sd was widened.",
        "Split the phase, or look at the rate over time.")
    BROTH_NOT_CLOSED = (
        "broth-not-closed", _W, "the broth that was found is not what the streams leave",
        "Every amount is off by as much.", "Look for evaporation, samples or a balance that slipped.")
    GAS_TAKEN_AS_INERT = (
        "gas-taken-as-inert", _N, "all gas but oxygen and CO2 is taken as inert",
        "Hydrogen, methane or nitrogen that is made or taken up would spoil every gas rate.",
        "Measure them, or give the outlet flow.")
    SPECIES_UNKNOWN = (
        "species-unknown", _E, "a measured species has no formula here, and stands in grams",
        "Rates count moles.", "Declare its formula, or give it in mol/L.")

    # --- tables of raw data ----------------------------------------------------------
    NO_RAW_DATA = (
        "no-raw-data", _E, "nothing that was given is a table over time",
        "Rates come from values with their times.", "Give a table with a column of time.")
    UNCLOSED_QUOTE = (
        "unclosed-quote", _E, "a quote is opened and never closed",
        "All rows behind it would become one cell.", "Close the quote, or take it away.")
    UNIT_MISSING = (
        "unit-missing", _E, "a column or a setting has no unit",
        "A unit that is assumed is a factor that is guessed.",
        "Write it in brackets in the title, in a row under it, or in columns.csv.")
    COLUMN_NOT_UNDERSTOOD = (
        "column-not-understood", _W, "a column of concentrations names nothing that is known",
        "What it holds would be missing from every balance.",
        "Say in columns.csv what it means, or `ignore`.")
    COLUMN_REPEATED = (
        "column-repeated", _E, "two columns mean the same",
        "Which one holds would depend on their order.", "Mark one of them `ignore` in columns.csv.")
    BAD_MAPPING = (
        "bad-mapping", _E, "a line of columns.csv means nothing",
        "The column would be read by its title, against what was meant.",
        "Write one of the words that the list of columns shows.")
    MAPPING_UNUSED = (
        "mapping-unused", _W, "a line of columns.csv meets no column",
        "The column that it was written for is read by its title again.",
        "Write the title as it stands in the table.")
    CELLS_LEFT_OUT = (
        "cells-left-out", _W, "cells held something that is no value, and were left out",
        "What is left out is not zero; a rate rests on the samples that remain.",
        "Correct the cells, or leave them blank.")
    AMBIGUOUS_DATE = (
        "ambiguous-date", _E, "dates may begin with the day or with the month",
        "A week would become seven months.", "Write a line `dates; day first` above the table.")
    TIME_BACKWARDS = (
        "time-backwards", _E, "time runs backwards from one row to the next",
        "A typed time or the order of the rows is wrong, and nothing tells which.",
        "Correct the time, or put the rows in order.")
    DOUBLED_TIME = (
        "doubled-time", _W, "several values stand at one time",
        "They may be replicates, or rows that were copied.",
        "Nothing for replicates: their mean is taken. Otherwise correct the times.")
    CLOCK_CHANGED = (
        "clock-changed", _W, "a clock was set to or from summer time",
        "An hour would be missing, or counted twice.",
        "Nothing: the hour is mended. Look at tables that another clock wrote.")
    CLOCKS_DIFFER = (
        "clocks-differ", _W, "two tables' clocks do not agree",
        "Samples would be compared with gas of another time.", "Correct one of the clocks.")
    CLOCKS_UNTIED = (
        "clocks-untied", _E, "one table tells a clock, another process time, and nothing ties them",
        "Their rows cannot be put beside each other.", "Say when the cultivation was inoculated.")
    INOCULATION_ASSUMED = (
        "inoculation-assumed", _W, "nothing tells when the cultivation was inoculated",
        "Rows from before it would count as growth.",
        "Write a line `inoculation; 2026-03-02 09:30` above the table.")
    BEFORE_INOCULATION = (
        "before-inoculation", _N, "samples were taken before inoculation",
        "They tell of the medium, not of the cells.", "Nothing, where this was meant.")
    NEGATIVE_CONCENTRATION = (
        "negative-concentration", _W, "a concentration is negative",
        "None is; a blank was taken off, or the cell is wrong. It is kept, never made 0.",
        "Leave the cell blank, or write the limit: <0.05.")
    MODE_GUESSED = (
        "mode-guessed", _N, "nothing names the mode of the cultivation",
        "Chemostat, batch and fed-batch are reckoned differently.",
        "Write a line `mode; fed-batch` above the table.")
