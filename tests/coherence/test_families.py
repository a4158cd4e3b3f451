"""Every coherence definition keeps the contract of the family."""

import pytest

from whitefringe.coherence import COHERENCE_DEFINITIONS, DEFAULT_DEFINITION

from .. import contracts
from .shapes import CONTINUA


@pytest.mark.parametrize("item", COHERENCE_DEFINITIONS, ids=lambda item: item.name)
@pytest.mark.parametrize("shape", ["top-hat", "triangle"])
def test_definitions(item, shape):
    contracts.is_a_coherence_definition(item, CONTINUA[shape])
    contracts.is_frozen(item)


def test_names_differ_and_the_default_comes_first():
    names = [item.name for item in COHERENCE_DEFINITIONS]
    assert len(set(names)) == len(names)
    assert names[0] == DEFAULT_DEFINITION == "bandwidth"
