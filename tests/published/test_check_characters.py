"""ISO/IEC 7064 MOD 37-2 against a published string."""

import pytest

from app.compliance.codes import check_character

pytestmark = pytest.mark.published


def test_a_published_donation_number():
    """G1234 89 654321 has the check character Y: open library python-stdnum, mod_37_2."""
    assert check_character("G123489654321") == "Y"
