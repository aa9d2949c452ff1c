#!/usr/bin/env python3
"""Writes audit files for the published approximations of published.json.

    python3 tests/outside/make_audits.py           writes audits/*.audit.json and expected.json
    python3 tests/outside/make_audits.py --check   fails if the committed files are not up to date

Every case whose reference and approximant need elementary functions only becomes an audit file;
expected.json says for each case what an audit must find, and for the others why there is no file.
"""

import json
import re
import sys
from decimal import ROUND_FLOOR, Decimal, localcontext
from fractions import Fraction
from pathlib import Path

from audit_cases import CHEBYSHEV_FORMS, OVERRIDES, VARIANTS
from formula_text import (
    FUNCTIONS,
    NOTATION,
    RESERVED,
    affine,
    called,
    decimal_text,
    exact,
    formula,
    literal,
    names,
    parse,
    sparse,
    steps,
    substitute,
)
from rough_value import removable_at_zero

FOLDER = Path(__file__).resolve().parent

# The storage format in which all coefficients of a case are exact, by its note in published.json.
STORAGE = {
    "decimal as printed": "exact",
    "binary32 (hex float)": "binary32",
    "binary64 (hex float)": "binary64",
    "binary128 (hex float)": "binary128",
    "binary128 and binary64 (hex float)": "binary128",
    "x87 64-bit significand and binary64 (hex float)": "exact",
}

SIGNIFICAND_BITS = {"binary32": 24, "binary64": 53, "binary128": 113}

SHORT_SOURCES = [
    (r".*Handbook of Mathematical Functions, .*, formula (.*)", r"Abramowitz & Stegun \1"),
    (r"Sun Microsystems fdlibm \(.*?\), (.*), comment in the source", r"fdlibm \1"),
    (r"P\. McIlroy, (.*), comment in the source", r"\1"),
    (r"FreeBSD msun \(.*?\), (.*), comment in the source", r"FreeBSD msun \1"),
    (r"Arm Ltd optimized-routines .*?: (.*), comment in the source", r"Arm optimized-routines \1"),
    (r".*Cephes Math Library \(long double\), (.*), comment in the source", r"Cephes \1"),
    (r"G\. W\. Burns et al\., NIST Monograph 175 \(1993\), (.*)", r"NIST Monograph 175, \1"),
    (r".*Boost\.Math, (.*), comment in the source.*", r"Boost.Math \1"),
    (r"W\. Fullerton, FNLIB \(.*\), routine (.*), series (.*), prologue", r"FNLIB \1, series \2"),
    (r"D\. H\. Eberly, (.*), sec\. .*", r"Eberly, \1"),
    (r"C\. Hastings, .* \(1955\), as carried.*", r"Hastings (1955) in MATH.C"),
    (r"J\. F\. Hart et al\., .* \(1968\), as carried.*", r"Hart (1968) in MATH.C"),
    (r"J\. F\. Hart et al\., Computer Approximations \(1968\): .*", r"Hart (1968)"),
    (r"J\. F\. Hart et al\., .*Berkeley libm sources", r"Hart (1968) in Berkeley libm"),
    (r"Digital Equipment Corporation, .*", r"DEC handbook in CLMATH"),
    (r"W\. J\. Cody, .*", r"Cody (1969), SPECFUN CALERF"),
    (r"M\. J\. Wichura, Algorithm AS 241, .*, (PPND.*)", r"Wichura, AS 241, \1"),
    (r"P\. J\. Acklam \(2000\).*", r"Acklam (2000)"),
    (r"S\. Winitzki \(2008\).*", r"Winitzki (2008)"),
    (r"Bhaskara I .*", r"Bhaskara I"),
    (r"R\. H\. Windschitl .*", r"Windschitl (2002)"),
    (r"NIST Digital Library of Mathematical Functions, (.*)", r"DLMF \1"),
    (r"W\. H\. Press et al\., Numerical Recipes \((.*)\), .*", r"Numerical Recipes, \1"),
    (r"H\. Preston-Thomas, .*, (eqs\..*)", r"ITS-90, \1"),
    (r"A&S (.*) as miscopied", r"Abramowitz & Stegun \1, miscopied"),
]


def short_source(source):
    for pattern, replacement in SHORT_SOURCES:
        if re.fullmatch(pattern, source):
            return re.sub(pattern, replacement, source)
    raise ValueError(f"no short form of the source {source!r}")


def bound_literal(printed):
    """(literal, note) of a printed bound.

    A figure that is a literal of audit files stays as it is. Another rational one becomes its
    exact decimal. A power with a fractional exponent is irrational: it is rounded down at 30
    digits, so that a claim with the literal is never weaker than the printed one.
    """
    try:
        exact(printed)
        return printed, None
    except ValueError:
        pass
    factor, base, exponent = re.fullmatch(r"(?:([\d.]+)\*)?(2|10)\^(-?[\d.]+)", printed).groups()
    if Fraction(exponent).denominator == 1:
        power = int(Fraction(exponent))
        if factor is None and base == "2":
            return f"2^{power}", None
        value = Fraction(factor or 1) * Fraction(int(base)) ** power
        return decimal_text(value), f"at_most is the exact decimal of {printed}"
    with localcontext() as context:
        context.prec = 60
        value = Decimal(base) ** Decimal(exponent)
        context.prec = 30
        context.rounding = ROUND_FLOOR
        value = +value
    return str(value).lower(), f"at_most is {printed} rounded down at 30 digits"


def bound_value(text):
    """The rational number that a bound's literal stands for."""
    match = re.fullmatch(r"2\^(-?\d+)", text)
    return Fraction(2) ** int(match.group(1)) if match else exact(text)


class Translation:
    """One case on its way to an audit file."""

    def __init__(self, case, override):
        self.case = case
        self.notes = [override["note"]] if "note" in override else []
        approximant = case["approximant"]
        self.storage = STORAGE[approximant["coefficient_format"]]
        self.arrays = {}
        renaming = {}
        for name, values in approximant["coefficients"].items():
            written = name + "_" if name in RESERVED else name
            self.arrays[written] = list(values)
            renaming[name] = parse(written)
        definitions = {
            name: parse(text) for name, text in approximant.get("definitions", {}).items()
        }
        known = {**renaming, **definitions}

        def tree(text):
            return substitute(parse(text), known)

        self.approximant = tree(override.get("approximant", approximant["formula"]))
        self.pieces = [{"on": override.get("domain", case["domain"]), "first": []}]
        parametrisation = case.get("parametrisation", {})
        if "reference" in parametrisation:
            self.reference = tree(parametrisation["reference"])
            self.insert_parameter(tree, parametrisation, override)
        else:
            self.reference = tree(override.get("reference", case["reference"]["formula"]))
        # A reference is a formula without constants: a[0] becomes the literal itself.
        elements = {f"{name}[0]": literal(values[0]) for name, values in self.arrays.items()}
        self.reference = substitute(self.reference, elements)

    def insert_parameter(self, tree, parametrisation, override):
        """Makes the parameter u the file's x; the case's own x becomes the first step, v."""
        variable = {"u": parse("x")}
        arguments = [tree(piece["x"]) for piece in parametrisation["pieces"]]
        if "x" in names(self.reference):
            (argument,) = arguments
            self.reference = substitute(self.reference, {"x": argument})
        self.reference = substitute(self.reference, variable)
        self.approximant = substitute(self.approximant, {"x": parse("v")})
        self.pieces = []
        for piece, argument in zip(parametrisation["pieces"], arguments):
            argument = substitute(argument, variable)
            self.pieces.append(
                {
                    "on": override.get("domain", piece["u_domain"]),
                    "first": [f"v = {formula(argument)}"],
                    "argument": argument,
                }
            )
        self.notes.insert(
            0,
            "the file's x is the parameter u of the case; the step v is the case's x "
            "and the reference is its value as a function of u",
        )

    def missing(self):
        """Functions and names of the case that no audit file can use yet."""
        trees = [self.reference, self.approximant] + [
            piece["argument"] for piece in self.pieces if "argument" in piece
        ]
        functions = set().union(*(called(tree) for tree in trees))
        missing = sorted(functions - FUNCTIONS - NOTATION)
        unknown = set().union(*(names(tree) for tree in trees)) - {"x", "v", "pi", *self.arrays}
        if unknown and not missing:
            raise ValueError(f"{self.case['id']}: unknown names {sorted(unknown)}")
        return missing

    def power_basis(self):
        terms = sparse(self.approximant, self.arrays)
        if not terms:
            return None
        degree = max(terms)
        form = {"basis": "power", "variable": "x", "order": "ascending"}
        remainders = {exponent % 2 for exponent in terms}
        if len(remainders) == 1 and degree > 1:
            (start,) = remainders
            exponents = range(start, degree + 1, 2)
            form["parity"] = "odd" if start else "even"
        else:
            exponents = range(degree + 1)
        coefficients = [terms.get(exponent, "0") for exponent in exponents]
        form["stored_as"] = self.storage_of(coefficients)
        form["pieces"] = [{"on": self.pieces[0]["on"], "coefficients": coefficients}]
        return form

    def storage_of(self, coefficients):
        """The case's storage format, or "exact" where a coefficient is wider than that format.

        So `stored_as` never changes a value.
        """
        bits = SIGNIFICAND_BITS.get(self.storage)
        for value in map(exact, coefficients) if bits else []:
            odd = value.numerator // (value.numerator & -value.numerator) if value else 0
            dyadic = value.denominator & (value.denominator - 1) == 0
            if not dyadic or odd.bit_length() > bits:
                self.notes.append(f"one coefficient is wider than {self.storage}")
                return "exact"
        return self.storage

    def chebyshev_basis(self):
        """cheb(c, affine) with or without a constant before it."""
        text = self.case["approximant"]["formula"]
        shape = re.fullmatch(r"(?:(-?[\d.]+)\+)?cheb\((\w+),(.*)\)", text)
        if not shape:
            return None
        constant, name, inner = shape.groups()
        map_of_x = affine(parse(inner))
        if map_of_x is None:
            return None
        slope, shift = map_of_x
        coefficients = list(self.arrays[name])
        first = CHEBYSHEV_FORMS[self.case["id"]]["first"]
        if constant:
            coefficients[0] = decimal_text(exact(coefficients[0]) + 2 * exact(constant))
            self.notes.append(
                f"the constant {constant} before the series is twice added to the first coefficient"
            )
        if first == "full":
            coefficients[0] = decimal_text(exact(coefficients[0]) / 2)
            self.notes.append("the halved first coefficient is written out, exactly")
        variable = {"origin": decimal_text(-shift / slope), "scale": decimal_text(1 / slope)}
        if CHEBYSHEV_FORMS[self.case["id"]].get("variable") == "centred":
            left, right = (exact(end) for end in self.pieces[0]["on"])
            if (exact(variable["origin"]), exact(variable["scale"])) != (
                (left + right) / 2,
                (right - left) / 2,
            ):
                raise ValueError(f"{self.case['id']}: not the centred variable")
            variable = "centred"
        return {
            "basis": "chebyshev",
            "variable": variable,
            "order": "ascending",
            "first": first,
            "stored_as": self.storage_of(coefficients),
            "pieces": [{"on": self.pieces[0]["on"], "coefficients": coefficients}],
        }

    def steps_basis(self, piece):
        arrays = dict(self.arrays)
        if "cheb" in called(self.approximant):
            (name,) = re.findall(r"cheb\((\w+),", self.case["approximant"]["formula"])
            first, *rest = arrays[name]
            arrays[name] = [decimal_text(exact(first) / 2), *rest]
            self.notes.append(
                "clenshaw takes the first coefficient in full, so it is halved here, exactly"
            )
        lines = steps(self.approximant, piece["first"], set(arrays) | {"v", "y"})
        text = " ".join(lines)
        used = {name: values for name, values in arrays.items() if re.search(rf"\b{name}\b", text)}
        form = {"basis": "steps"}
        if used:
            form["constants"] = used
        form["stored_as"] = "exact"
        form["steps"] = lines
        form["on"] = piece["on"]
        return form

    def forms(self):
        if "argument" not in self.pieces[0]:
            simple = self.power_basis() or self.chebyshev_basis()
            if simple:
                return [simple]
        return [self.steps_basis(piece) for piece in self.pieces]

    def audit(self, title, claim):
        """The audit file as a dictionary."""
        document = {"title": title, "reference": {"formula": formula(self.reference)}}
        forms = self.forms()
        if len(forms) == 1:
            document["approximant"] = forms[0]
            document["claims"] = [{"id": "published", **claim}]
        else:
            document["approximants"] = [
                {"id": f"part-{number}", **form} for number, form in enumerate(forms, 1)
            ]
            document["claims"] = [
                {"id": f"published-{number}", "approximant": f"part-{number}", **claim}
                for number in range(1, len(forms) + 1)
            ]
            self.notes.append(
                "one approximant for each piece of the parametrisation; the supremum of the case "
                "is the larger one of the claims"
            )
        return document


def verdict(case, at_most):
    """What an audit must conclude, checked against the independent enclosure of the supremum."""
    lower, upper = (exact(end) for end in case["computed"]["sup_error"])
    bound = bound_value(at_most)
    if upper <= bound:
        found = "holds"
    elif lower > bound:
        found = "fails"
    else:
        raise ValueError(f"{case['id']}: the enclosure of the supremum contains the bound")
    if found != ("holds" if case["claim_holds"] is True else "fails"):
        raise ValueError(f"{case['id']}: the bound read exactly contradicts claim_holds")
    return found


def entry_and_audit(case, override, identifier, variant_of=None):
    """The line of expected.json and, for a covered case, the audit file."""
    entry = {"id": identifier}
    if variant_of:
        entry["variant_of"] = variant_of
    translation = Translation(case, override)
    missing = translation.missing()
    entry["covered"] = not missing
    entry["source"] = short_source(case["source"])
    entry["title"] = case["title"]
    if missing:
        plural = "functions" if len(missing) > 1 else "function"
        entry["why"] = f"needs the special {plural} {', '.join(missing)}"
        return entry, None
    on = translation.pieces[0]["on"]
    if "inf" in on:
        raise ValueError(f"{case['id']}: infinite domain without an override")
    at_most, bound_note = bound_literal(case["stated_bound"]["printed"])
    claim = {"of": "exact", "error": case["error"], "at_most": at_most}
    audit = translation.audit(case["title"], claim)
    notes = translation.notes + ([bound_note] if bound_note else [])
    forms = audit.get("approximants") or [audit["approximant"]]
    entry["file"] = f"audits/{identifier}.audit.json"
    entry["printed"] = case["stated_bound"]["printed"]
    entry["at_most"] = at_most
    entry["error"] = case["error"]
    entry["basis"] = forms[0]["basis"]
    entry["claims"] = [line["id"] for line in audit["claims"]]
    entry["supremum"] = case["computed"]["sup_error"]
    if case["error"] == "absolute":
        entry["signed_minimum"] = case["computed"]["signed_min"]
        entry["signed_maximum"] = case["computed"]["signed_max"]
    entry["claim_holds"] = str(case["claim_holds"]).lower()
    entry["expected_verdict"] = verdict(case, at_most)
    removable = removable_at_zero(audit["reference"]["formula"], on)
    if removable:
        notes.append("the reference has a removable singularity at 0, which belongs to the domain")
    entry["removable_singularity"] = removable
    if notes:
        entry["note"] = "; ".join(notes)
    return entry, audit


def generate():
    """All files as {path relative to this folder: text}."""
    cases = json.loads((FOLDER / "published.json").read_text(encoding="utf-8"))
    by_id = {case["id"]: case for case in cases}
    jobs = [(case, OVERRIDES.get(case["id"], {}), case["id"], None) for case in cases]
    jobs += [
        (by_id[variant["of"]], variant, identifier, variant["of"])
        for identifier, variant in VARIANTS.items()
    ]
    files = {}
    entries = []
    for job in jobs:
        entry, audit = entry_and_audit(*job)
        entries.append(entry)
        if audit is not None:
            files[entry["file"]] = json.dumps(audit, indent=2) + "\n"
    own = [entry for entry in entries if "variant_of" not in entry]
    covered = sum(entry["covered"] for entry in own)
    index = {
        "published_cases": len(own),
        "covered": covered,
        "not_covered": len(own) - covered,
        "variants": len(entries) - len(own),
        "cases": entries,
    }
    files["expected.json"] = json.dumps(index, indent=2) + "\n"
    return files


def committed():
    """The generated files as they are on disk."""
    paths = sorted((FOLDER / "audits").glob("*")) + [FOLDER / "expected.json"]
    return {
        path.relative_to(FOLDER).as_posix(): path.read_bytes().decode()
        for path in paths
        if path.is_file()
    }


def main(arguments):
    if arguments not in ([], ["--check"]):
        print("usage: make_audits.py [--check]", file=sys.stderr)
        return 2
    wanted, present = generate(), committed()
    stale = sorted(
        name for name in present.keys() | wanted.keys() if present.get(name) != wanted.get(name)
    )
    if arguments:
        for name in stale:
            print(f"not up to date: {name}", file=sys.stderr)
        return 1 if stale else 0
    (FOLDER / "audits").mkdir(exist_ok=True)
    for name in stale:
        if name in wanted:
            (FOLDER / name).write_bytes(wanted[name].encode())
        else:
            (FOLDER / name).unlink()
    index = json.loads(wanted["expected.json"])
    print(
        f"{index['covered']} of {index['published_cases']} cases covered, "
        f"{index['variants']} variants"
    )
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
