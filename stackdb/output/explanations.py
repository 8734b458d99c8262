"""What ``explain`` says: each method in a few lines, with its formula, its range and its source."""

from __future__ import annotations

from stackdb.evidence import settings


def _confidence() -> str:
    rows = [f"  {rule.grade:<8} {rule.note}" for rule in settings.GRADES]
    return (
        "The grade is derived, never typed. The first line that is met gives it:\n"
        + "\n".join(rows)
        + "\nRead means seen in the source's own text. Anonymous tables do not count as read sources. Hit rates and\n"
        "widths by grade: stackdb verify --calibration."
    )


def _evidence() -> str:
    kinds = ", ".join(f"{k} {u:g}" for k, u in settings.KIND_U.items())
    spreads = ", ".join(f"{k} {u:g}" for k, u in settings.SPREAD.items())
    return (
        "One figure a source, then sources against each other, in ln(permittivity).\n"
        "Each record is moved to the conditions asked and carries u from the kind of text it stands in\n"
        f"({kinds}), how it was seen, rounding, its printed range, its move and what it\n"
        "does not state. Within a source: mean weighted by 1/u^2. Between sources: the variance of Paule and Mandel\n"
        "(1982), shrunk toward the class's spread as if that were six sources, robust weights 5/(4 + z^2) from three\n"
        f"sources on. Class spreads: {spreads}.\n"
        "Range: Student, for the next lot or supplier, not for the mean. Never below the index floor."
    )


CODES = {
    "below-empty": "--below names a plane without a layer before it",
    "case-unknown": "no way of touching of that name",
    "catalogue-damaged": "a catalogue file is damaged",
    "catalogue-newer": "a catalogue file is from a newer version",
    "catalogue-unusable": "a file is no usable catalogue",
    "character": "a character that no name or text may hold",
    "choice-outside-sweep": "or, by, none stand only in a sweep",
    "command-unknown": "no command of that name",
    "conduction-twice": "sigma= and rs= together",
    "conductor-in-path": "a conductor is no dielectric layer: no gap",
    "constraint-claim": "a constraint claims nothing",
    "constraint-place": "a constraint names no layer or material",
    "control-character": "a control or direction-changing character",
    "cover-too-thin": "a cover too thin against the pad for the field solution",
    "field-not-converged": "the field solution did not converge",
    "pad-missing": "no pad for the field solution",
    "data-faults": "faults of the curated data",
    "decimal-comma": "a decimal comma",
    "empty": "an empty stack",
    "eps-below-one": "a permittivity below 1",
    "eps-uneven": "a range that text cannot hold",
    "file-damaged": "a stack file that is no TOML",
    "file-missing": "a file that is not there",
    "file-name": "a stack file's name must end in .toml",
    "file-newer": "a stack file of a newer format",
    "file-not-ours": "a file that would be overwritten and is no stack file",
    "file-too-large": "a file too large to be a stack",
    "file-unreadable": "a file that cannot be read",
    "file-unwritable": "a file that cannot be written",
    "fill-missing": "host= or rule= without fill=",
    "first-order-off": "the first-order range is off: use Monte Carlo",
    "foreign-digit": "a digit outside 0 to 9",
    "format": "a format that is not known",
    "format-missing": "a stack file without format",
    "frequency-unknown": "no record states its frequency",
    "gap-not-signal": "equal gap is not equal signal",
    "get-unknown": "--get names nothing",
    "given-twice": "a tolerance given two ways",
    "interrupted": "a run that was interrupted",
    "key-unknown": "an unknown key in a stack file",
    "layer-missing": "a separator with no layer beside it",
    "layer-unknown": "no layer of that number",
    "layers-missing": "a stack file without layers",
    "loss-twice": "tan= and sigma= together",
    "loss-unknown": "a layer's loss is not known",
    "market-tolerance": "the market's tolerance stands in",
    "missing-unit": "a number without unit",
    "moved": "a record was carried far",
    "name-shared": "a name that several materials share",
    "name-unknown": "no material of that name",
    "no-name": "a thickness without material",
    "no-permittivity": "a conductor without permittivity",
    "no-text": "nothing to read",
    "no-thickness": "a layer or stack without thickness",
    "no-usable-record": "a material with warnings alone",
    "not-a-number": "text where a number should be",
    "not-a-pair": "not MATERIAL=EPS",
    "not-a-range": "not LOW..HIGH",
    "not-finite": "a number that is not finite",
    "not-solved": "a case the field solution does not treat",
    "one-target": "size needs exactly one target",
    "option-missing": "an option that is needed",
    "out-of-range": "a value outside what is possible",
    "own-missing": "no own figures yet",
    "percolation": "a conducting filler near percolation",
    "picture-ending": "a picture must be .svg or .png",
    "range-open": "a range without an end",
    "range-reversed": "a range from high to low",
    "recalled": "a figure from memory alone",
    "reference-missing": "a ratio without reference",
    "refused": "a stack that is refused",
    "retransmission": "a large contact may be sent on by a floating device",
    "return-path-open": "the return path is not counted without sizes",
    "rule-missing": "a constraint without rule",
    "rule-unknown": "no mixing rule of that name",
    "setting-empty": "a setting without value",
    "setting-last": "settings stand after name and thickness",
    "setting-twice": "a setting given twice",
    "setting-unknown": "no setting of that name",
    "sizes-missing": "pad, finger or neighbours are missing",
    "slash-in-name": "a slash without spaces",
    "source-unknown": "no source of that key",
    "source-without-record": "a source that says nothing of the material",
    "sqlite-old": "SQLite older than 3.37",
    "step": "a step of a sweep that is none",
    "thickness-twice": "two thicknesses for a layer",
    "tolerance-sign": "a tolerance of the wrong sign",
    "tolerance-too-large": "a tolerance larger than the layer",
    "too-few-stacks": "compare needs two stacks",
    "too-long": "a text or number too long",
    "too-many-layers": "more than 1,000 layers",
    "too-many-steps": "too many steps in a sweep",
    "topic-unknown": "no topic of that name",
    "unit-case": "a unit in the wrong case",
    "unit-twice": "a unit that stands twice",
    "unit-unwanted": "a unit on a pure number",
    "unknown-unit": "no such unit",
    "usage": "wrong options",
    "word-unknown": "a word that is none of those allowed",
    "wrong-type": "a value of the wrong type in a stack file",
}


def _codes() -> str:
    width = max(len(code) for code in CODES)
    return "\n".join(f"{code:<{width}}  {text}" for code, text in CODES.items())


TOPICS: dict[str, tuple[str, str]] = {
    "gap": (
        "the equivalent air gap and the series sum",
        "g = sum t/eps: Maxwell (1864), paragraph 86. C/A = eps0/g, eps0 = 8.8541878188e-12 F/m (CODATA 2022).\n"
        "eps_eff = T/g. With loss eps* = eps'(1 - j tan d) - j sigma/(w eps0) goes through the same sum, and the gap is\n"
        "eps0 over the real part of C/A. Exact for plates much wider than the stack; see validity.",
    ),
    "evidence": ("many records to one value with a range", _evidence()),
    "confidence": ("the four grades and their rule", _confidence()),
    "moves": (
        "carrying a figure to another frequency, temperature or humidity",
        "Along the material's own measured slopes where they reach. Else, in frequency, by the loss: ln eps falls by\n"
        "(2/pi) times the integral of tan d over ln f, about 1.47 tan d a decade (local Kramers-Kronig relation), for\n"
        "tan d below 0.1, not along a conduction tail, no further than 0.3. Costs: half the move and 0.006 a decade.\n"
        "Else by the class's loss: 0.7 of the move and 0.01 a decade. Temperature and humidity without slopes: no move,\n"
        "but a cost for every kelvin and percent.",
    ),
    "range": (
        "first-order ranges and tolerances",
        "ln(permittivity) normal, one error a material, shared by its layers; thickness rectangular between its limits;\n"
        "variances add (JCGM 100:2008). The gap's range is symmetric in its logarithm and cut at the thickness corners\n"
        "times the permittivity ranges: a typed limit is never passed. A layer without a tolerance takes the market's.",
    ),
    "conduction": (
        "films, inks, water: conductors in the path",
        "A film smears a touch over L = 1/sqrt(w R C''), C'' summed over both sides. Allowed blur 5 mm (common practice):\n"
        "refused beyond it, ok below a fifth of it. A continuous conductor or a liquid whose relaxation frequency\n"
        "sigma/(2 pi eps0 eps) is above the drive is never summed as a dielectric.",
    ),
    "validity": (
        "where the parallel-plate idea stops being true",
        "The field of a circular pad under a circular finger on the layered stack, by spectral-domain Galerkin with\n"
        "edge-singular functions, to 1e-5. Edge factor = true change over eps0 A/g. Among grounded neighbours it is well\n"
        "below 1 on thick covers; alone it may be near 1. Within 10 %: the gap may stand for values. Beyond: ratios at\n"
        "like thickness, or ranking only.",
    ),
    "touch": (
        "gloves, ridges, films, and the way back to ground",
        "A way of touching is a small stack on the cover. The finger's ridges hold about 12 um of air (a computed\n"
        "estimate). What conducts on a hand is part of the finger. The way back: change = C11 - C12^2/(C22 + C_return)\n"
        "- C_untouched, C_return being body and device in series.",
    ),
    "water": (
        "films of water on the cover",
        "Pure water: IAPWS R8-97. Sea water: PSS-78. Salt: McCleskey (2011). Ice: Johari and Jones (1978). A conducting\n"
        "film looks like F of a touch: the change by the film over that by a grounded plane, by the layered solution;\n"
        "1 - F remains on the wet cover. The closed form 2 I1(ga) K1(ga) holds for covers much thinner than the pad. A puddle\n"
        "on a level plate stands 2 L sin(theta/2) high: 1.4 mm at 30 degrees, 2.7 at 60, 3.9 at 90 (L = 2.73 mm).",
    ),
    "mixtures": (
        "fabrics, foams, filled inks",
        "fill= is the solid volume fraction, areal mass over thickness times fibre density. Rules: maxwell-garnett,\n"
        "bruggeman, bruggeman-hanai, looyenga (default), lichtenecker, square-root, series, parallel. Wiener's bounds\n"
        "hold always, those of Hashin and Shtrikman for isotropic textures. A conducting filler above 5 % is refused.",
    ),
    "calibration": (
        "do the ranges hold",
        "Each source of each material is left out once and its figure predicted at its own conditions; hits are counted\n"
        "by source, with no allowance for the left-out figure's own error. Rows are left out only by rules that do not\n"
        "look at other sources. stackdb verify --calibration prints coverage, widths, scores and the worst misses.",
    ),
    "json": (
        "shapes of the JSON",
        "First key format: 1. An uncertain number is {value, low, high} at level. What does not exist or is refused is\n"
        "null, its reason in warnings. Layers count from 1 at the touched side. Every source key used stands in sources.\n"
        "An error is {format, error: {code, text, hint, layer, span}}. --get takes a path: air_equivalent_gap_m.low.",
    ),
    "codes": ("codes of errors and warnings", _codes()),
    "status": (
        "exit status",
        "0 answered; 1 answered and a limit is not met, or verify found a fault; 2 the input cannot be used; 3 a file\n"
        "cannot be used; 130 interrupted, what is done is printed.",
    ),
    "safety": (
        "what this program does not decide",
        "Gloves are protective equipment: if the signal is too small, change the panel. Insulation and impact belong to\n"
        "their standards and their owners: recorded minima are printed and never traded. No safety function rests on one\n"
        "touch. Local codes and licensed practice come first.",
    ),
}


def explanation(topic: str) -> str:
    """A topic's text with its title."""
    title, text = TOPICS[topic]
    body = "\n".join(f" {row}" for row in text.splitlines())
    return f" {topic}: {title}\n\n{body}"
