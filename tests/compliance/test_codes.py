"""Bottle codes: one slip or one swap is always caught, on the server and on the tablet alike."""

import json
import shutil
import subprocess
from itertools import islice, permutations
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.codes import ALPHABET, LENGTH, STANDARD, check, check_character, codes, make
from app.errors import InputError

VECTORS = Path(__file__).parent / "bottle_code_vectors.json"
CLIENT = Path(__file__).parents[2] / "static" / "parts" / "bottle_code.js"
SAMPLE = list(islice(codes(4_000_000, 60), 60))


def valid(text: str) -> bool:
    """Tell whether a text passes as a bottle code."""
    try:
        check(text)
    except InputError:
        return False
    return True


def test_every_single_slip_is_caught_at_every_position():
    """D * 2**i is never 0 modulo 37: proven over all pairs of printed characters and all six positions."""
    value = STANDARD.index
    for a, b in permutations(ALPHABET, 2):
        for i in range(LENGTH):
            assert (value(a) - value(b)) * 2**i % 37 != 0


def test_every_swap_of_neighbours_is_caught_at_every_position():
    """(a 2^(i+1) + b 2^i) - (b 2^(i+1) + a 2^i) = (a - b) 2^i is never 0 modulo 37: proven over all pairs."""
    value = STANDARD.index
    for a, b in permutations(ALPHABET, 2):
        for i in range(LENGTH - 1):
            before, after = (
                value(a) * 2 ** (i + 1) + value(b) * 2**i,
                value(b) * 2 ** (i + 1) + value(a) * 2**i,
            )
            assert (before - after) % 37 != 0


@pytest.mark.parametrize("code", SAMPLE)
def test_no_slip_or_swap_of_a_real_code_passes(code):
    """All 6 x 26 substitutions and all swaps of unlike neighbours of a real code are refused."""
    assert check(code) == code
    for i in range(LENGTH):
        for other in ALPHABET:
            assert valid(code[:i] + other + code[i + 1 :]) == (other == code[i])
    for i in range(LENGTH - 1):
        if code[i] != code[i + 1]:
            assert not valid(code[:i] + code[i + 1] + code[i] + code[i + 2 :])


def test_nothing_that_is_misread_is_printed():
    """Of each group of twins at most one character is used, and all stand in the standard's set."""
    for twins in ("0O", "1IL", "2Z", "5S", "8B", "UV"):
        assert sum(c in ALPHABET for c in twins) <= 1
    assert set(ALPHABET) < set(STANDARD)
    assert len(set(ALPHABET)) == len(ALPHABET)


@given(st.text(STANDARD[:-1], max_size=20))
def test_the_check_character_is_the_standards(text):
    """ISO/IEC 7064 by its definition: the terms a_i 2**i from the right add up to 1 modulo 37."""
    whole = text + check_character(text)
    assert sum(STANDARD.index(c) * 2**i for i, c in enumerate(reversed(whole))) % 37 == 1


def test_there_are_enough_codes():
    """More than ten million bodies have a printable check character: counted by remainders modulo 37."""
    ways = {0: 1}
    for _ in range(LENGTH - 1):
        step: dict[int, int] = {}
        for total, count in ways.items():
            for c in ALPHABET:
                key = (total + STANDARD.index(c)) * 2 % 37
                step[key] = step.get(key, 0) + count
        ways = step
    issued = sum(count for total, count in ways.items() if STANDARD[(1 - total) % 37] in ALPHABET)
    assert issued > 10_000_000


def test_codes_in_order_are_all_different_and_can_be_taken_up_again():
    """A later sheet starts where the earlier one ended."""
    first = list(codes(0, 400))
    assert len(set(first)) == 400
    assert all(check(code) == code for code in first)
    assert first == [make(code[:-1]) for code in first]


@given(st.text(ALPHABET, min_size=5, max_size=5))
def test_a_body_gives_a_code_or_is_never_issued(body):
    """No code ends in a character that could be misread."""
    last = check_character(body)
    if last in ALPHABET:
        assert check(make(body)) == body + last
    else:
        with pytest.raises(InputError):
            make(body)


@given(st.sampled_from(SAMPLE), st.data())
def test_what_thumbs_do_to_a_code_is_forgiven(code, data):
    """Small letters, spaces and hyphens; a 2, 5 or 8 read as Z, S or B."""
    typed = "".join({"2": "Z", "5": "S", "8": "B"}.get(c, c) if data.draw(st.booleans()) else c for c in code)
    typed = typed.lower() if data.draw(st.booleans()) else typed
    assert check(f" {typed[:3]}-{typed[3:]} ") == code


@given(st.text(max_size=12))
def test_any_text_is_a_code_or_gets_words(text):
    """Never a traceback, whatever a scanner gives."""
    try:
        assert len(check(text)) == LENGTH
    except InputError as error:
        assert error.fields["bottle"]


def test_numbers_of_codes_are_checked():
    """Negative numbers, and a start behind the last body."""
    for start, count in ((-1, 1), (0, -1), (27**5, 1)):
        with pytest.raises(InputError):
            list(codes(start, count))
    with pytest.raises(InputError):
        make("22222P")


def test_the_vectors_are_what_the_server_says():
    """The shared file holds for this side."""
    vectors = json.loads(VECTORS.read_text(encoding="utf-8"))
    for body, code in vectors["made"]:
        if code:
            assert make(body) == code
        else:
            with pytest.raises(InputError):
                make(body)
    for typed, code, problem in vectors["read"]:
        if code:
            assert check(typed) == code
        else:
            with pytest.raises(InputError) as caught:
                check(typed)
            assert caught.value.fields["bottle"] == [problem]


@pytest.mark.skipif(
    shutil.which("node") is None, reason="node is not on the path: the tablet's side was not run"
)
def test_the_tablet_reads_codes_as_the_server_does(tmp_path):
    """The client's module, run by node on the shared vectors."""
    script = tmp_path / "run.mjs"
    script.write_text(
        f"""import {{ checkCharacter, makeCode, readCode }} from {json.dumps(CLIENT.as_uri())};
import {{ readFileSync }} from "node:fs";
const v = JSON.parse(readFileSync({json.dumps(str(VECTORS))}, "utf-8"));
const answer = {{
  made: v.made.map(([body]) => makeCode(body)),
  read: v.read.map(([typed]) => readCode(typed)),
  published: checkCharacter("G123489654321"),
}};
console.log(JSON.stringify(answer));
""",
        encoding="utf-8",
    )
    ran = subprocess.run(["node", str(script)], capture_output=True, text=True, timeout=60, check=True)
    answer = json.loads(ran.stdout)
    vectors = json.loads(VECTORS.read_text(encoding="utf-8"))
    assert answer["published"] == "Y"
    assert answer["made"] == [code for _, code in vectors["made"]]
    assert answer["read"] == [{"code": code, "problem": problem} for _, code, problem in vectors["read"]]
