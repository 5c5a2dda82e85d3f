"""Checks the schema that the program prints with an independent JSON Schema validator.

usage: check_schema.py SCHEMA     cases that the program accepts must be valid, refused ones whose
                                  mistake a schema can see must not be
"""

import json
import pathlib
import sys
import tomllib

from jsonschema import Draft202012Validator

# Refused cases whose mistakes lie in keys, kinds, words and units. The others concern ranges of
# quantities, shapes, names and what goes together across tables.
SEEN = """
air-film-numbers air-incomplete air-word limits-conflict list-brackets many-mistakes
material-mistakes mesh-conflict missing-keys missing-tables not-finite repeat-mistakes
side-conditions side-unknown solve-range unit-comma unit-missing unit-unknown
unit-wrong-dimension unknown-keys wrong-kinds
""".split()
# Refused for shapes and names alone.
UNSEEN = "block-outside block-overlap names-twice no-way-out repeat-outside slot-overlap".split()

schema = json.loads(pathlib.Path(sys.argv[1]).read_text())
Draft202012Validator.check_schema(schema)
validator = Draft202012Validator(schema)
failures = 0


def check(path, wanted):
    global failures
    found = list(validator.iter_errors(tomllib.loads(path.read_text())))
    good = bool(found) != wanted
    failures += not good
    print(f"{'ok    ' if good else 'FAILED'} {path} is {'valid' if wanted else 'refused'}")
    if not good:
        print("\n".join(f"    {e.json_path}: {e.message[:200]}" for e in found[:5]))


valid = [*pathlib.Path("cases").glob("*.toml"), *pathlib.Path("tests/cases").glob("*.toml")]
valid += pathlib.Path("tests/reference").glob("*.toml")
for path in sorted(valid):
    check(path, True)
for name in SEEN:
    check(pathlib.Path("tests/bad-cases") / f"{name}.toml", False)
for name in UNSEEN:
    check(pathlib.Path("tests/bad-cases") / f"{name}.toml", True)
print(f"{failures} failed" if failures else f"{len(valid)} valid, {len(SEEN)} refused, as they should be")
sys.exit(1 if failures else 0)
