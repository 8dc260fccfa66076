"""Each code of parts files is told of its faulty sample and not of its mended one."""

import pytest

from tardigate.parts.library import Library
from tardigate.source.code_table import every_code, look_up
from tardigate.source.collector import Collector
from tardigate.source.files import SourceFile

CODES = [code for code in every_code() if code.startswith("P")]


def codes_of(sample: dict[str, str]) -> set[str]:
    collector = Collector()
    words = sample.get("arguments", "").split()
    condition = words[words.index("--condition") + 1] if "--condition" in words else None
    Library.read([SourceFile("family.parts", sample["family.parts"].encode())], condition, collector)
    return {diagnostic.code for diagnostic in collector.all()}


@pytest.mark.parametrize("code", CODES)
def test_the_faulty_sample_has_this_fault_alone(code: str) -> None:
    assert codes_of(dict(look_up(code).faulty)) == {code}


@pytest.mark.parametrize("code", CODES)
def test_the_mended_sample_has_no_fault(code: str) -> None:
    assert codes_of(dict(look_up(code).mended)) == set()
