"""What `import toeline` gives, and when."""

import subprocess
import sys

import pytest

import toeline


def in_a_fresh_interpreter(program: str) -> str:
    return subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True).stdout


def test_importing_the_package_loads_nothing_heavy():
    heavy = "{'numpy', 'numba', 'xarray', 'pydantic'}"
    assert in_a_fresh_interpreter(f"import sys, toeline; print(sorted({heavy} & set(sys.modules)))") == "[]\n"


@pytest.mark.parametrize("name", toeline.__all__)
def test_every_public_name_is_there(name):
    assert getattr(toeline, name) is not None
    assert name in dir(toeline)


@pytest.mark.parametrize(
    "imports",
    ["import toeline.simulate", "from toeline.simulate import simulate", "from toeline import simulate"],
)
def test_simulate_is_the_function_however_its_module_was_imported(imports):
    assert in_a_fresh_interpreter(f"import toeline\n{imports}\nprint(callable(toeline.simulate))") == "True\n"


def test_a_name_that_is_not_there_is_an_attribute_error():
    with pytest.raises(AttributeError, match="simulat"):
        toeline.simulat  # noqa: B018
