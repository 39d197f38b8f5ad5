"""Every public science function says what the house asks for, and its example runs."""

import ast
import doctest
import importlib
import inspect
import pkgutil
import re
from types import FunctionType, ModuleType

import pytest

import server.science

SECTIONS = ["Parameters", "Returns", "Raises", "Source", "Example"]
FLAGS = doctest.NORMALIZE_WHITESPACE | doctest.ELLIPSIS
MODULES = [
    importlib.import_module(found.name)
    for found in pkgutil.walk_packages(server.science.__path__, "server.science.")
]


def public_functions(module: ModuleType) -> list[FunctionType]:
    """Functions made in the module itself, those of its classes left out."""
    return [
        member
        for name, member in vars(module).items()
        if inspect.isfunction(member)
        and not name.startswith("_")
        and member.__module__ == module.__name__
    ]


FUNCTIONS = [
    pytest.param(function, id=f"{module.__name__[len('server.science.') :]}.{function.__name__}")
    for module in MODULES
    for function in public_functions(module)
]


def sections_of(function: FunctionType) -> dict[str, str]:
    """The docstring cut at its underlined headings, in their order; the opening is ''."""
    parts = re.split(r"^(\w+)\n-{3,}\n", inspect.getdoc(function) or "", flags=re.MULTILINE)
    return {"": parts[0], **dict(zip(parts[1::2], parts[2::2], strict=True))}


def names_in(parameters: str) -> list[str]:
    """Names listed in a Parameters section, stars kept."""
    listed = re.findall(r"^(\*{0,2}\w+(?:, \*{0,2}\w+)*) : ", parameters, flags=re.MULTILINE)
    return [name for names in listed for name in names.split(", ")]


def names_taken(function: FunctionType) -> list[str]:
    """Names of the signature, with the stars of variable arguments."""
    stars = {inspect.Parameter.VAR_POSITIONAL: "*", inspect.Parameter.VAR_KEYWORD: "**"}
    parameters = inspect.signature(function).parameters.values()
    return [stars.get(parameter.kind, "") + parameter.name for parameter in parameters]


def raised_by(function: FunctionType) -> set[str]:
    """Names of the errors that the function itself raises."""
    tree = ast.parse(inspect.getsource(function))
    raised = (node.exc for node in ast.walk(tree) if isinstance(node, ast.Raise))
    return {
        error.func.id
        for error in raised
        if isinstance(error, ast.Call) and isinstance(error.func, ast.Name)
    }


def test_the_folder_is_seen():
    seen = {module.__name__.removeprefix("server.science.") for module in MODULES}

    assert {"faraday", "charge", "equilibrium.potential", "statistics.spread"} <= seen
    assert len(FUNCTIONS) > 50


@pytest.mark.parametrize("module", MODULES, ids=lambda module: module.__name__)
def test_a_module_says_in_one_sentence_what_it_holds(module):
    sentence = (module.__doc__ or "").strip().splitlines()

    assert len(sentence) == 1
    assert sentence[0].endswith(".")


@pytest.mark.parametrize("function", FUNCTIONS)
def test_a_function_begins_with_one_sentence(function):
    first, *rest = sections_of(function)[""].splitlines()

    assert first[0].isupper()
    assert first.endswith(".")
    assert not rest or rest[0] == ""


@pytest.mark.parametrize("function", FUNCTIONS)
def test_sections_stand_in_the_order_of_the_house(function):
    found = [name for name in sections_of(function) if name]

    takes = bool(inspect.signature(function).parameters)
    required = [name for name in SECTIONS if name != "Raises" and (takes or name != "Parameters")]
    assert found == [name for name in SECTIONS if name in found]
    assert set(required) <= set(found)


@pytest.mark.parametrize("function", FUNCTIONS)
def test_parameters_are_those_of_the_signature(function):
    assert names_in(sections_of(function).get("Parameters", "")) == names_taken(function)


@pytest.mark.parametrize("function", FUNCTIONS)
def test_no_section_is_empty(function):
    sections = sections_of(function)

    assert [name for name, text in sections.items() if not text.strip()] == []


@pytest.mark.parametrize("function", FUNCTIONS)
def test_every_error_raised_is_announced(function):
    announced = set(re.findall(r"^(\w+)$", sections_of(function).get("Raises", ""), re.MULTILINE))

    assert raised_by(function) <= announced


@pytest.mark.parametrize("function", FUNCTIONS)
def test_the_example_runs(function):
    module = importlib.import_module(function.__module__)
    runner = doctest.DocTestRunner(verbose=False, optionflags=FLAGS)
    finder = doctest.DocTestFinder(recurse=False)

    found = finder.find(function, function.__name__, module=module, globs=dict(vars(module)))
    examples = [test for test in found if test.examples]
    for test in examples:
        runner.run(test, out=lambda text: None)

    assert examples
    assert runner.summarize(verbose=False).failed == 0


@pytest.mark.parametrize("module", MODULES, ids=lambda module: module.__name__)
def test_classes_and_their_methods_are_explained(module):
    classes = [
        member
        for member in vars(module).values()
        if inspect.isclass(member) and member.__module__ == module.__name__
    ]

    silent = [
        f"{kind.__name__}.{name}"
        for kind in classes
        for name, member in {"": kind, **vars(kind)}.items()
        if not name.startswith("_")
        and (inspect.isfunction(member) or inspect.isclass(member) or isinstance(member, property))
        and not (member.__doc__ or "").strip()
    ]
    assert silent == []


@pytest.mark.parametrize("module", MODULES, ids=lambda module: module.__name__)
def test_a_constant_has_its_source_on_the_line_above(module):
    lines = inspect.getsource(module).splitlines()

    bare = [
        lines[node.lineno - 1]
        for node in ast.parse(inspect.getsource(module)).body
        if isinstance(node, ast.Assign | ast.AnnAssign)
        and re.match(r"[A-Z][A-Z0-9_]+\b", lines[node.lineno - 1])
        and not lines[node.lineno - 2].startswith("#")
    ]

    assert bare == []


UNITS = {
    "_kwh_t": "kWh/t", "_mg_l": "mg/L", "_kg_kah": "kg/kAh", "_m3_h": "m3/h",
    "_a_m2": "A/m2", "_mol_m3": "mol/m3", "_kg_m3": "kg/m3", "_m2_s": "m2/s", "_m3_s": "m3/s",
    "_pa_s": "Pa s", "_s_m": "S/m", "_j_mol": "J/mol", "_j_kg": "J/kg", "_kg_c": "kg/C",
    "_ohm_m2": "ohm m2", "_ohm_m": "ohm m", "_v_k": "V/K", "_g_l": "g/L", "_mol_kg": "mol/kg",
    "_m_s": "m/s", "_rad_s": "rad/s", "_kg_mol": "kg/mol", "_kg_s": "kg/s",
    "_volts": "V", "_amps": "A", "_ohm": "ohm", "_kg": "kg", "_m2": "m2", "_m3": "m3",
    "_bar": "bar", "_v": "V", "_k": "K", "_s": "s", "_m": "m", "_c": "C", "_j": "J", "_w": "W",
    "_t": "T",
}  # fmt: skip
"""Ends of names that are units, the longer ones first, and how a docstring writes them."""


def unit_in(name: str) -> str | None:
    """The unit in which a name ends; the whole name may be one, but not a single letter."""
    ends = f"_{name.partition('_from_')[0]}"
    return next((u for end, u in UNITS.items() if ends.endswith(end) and len(name) > 1), None)


def described(section: str) -> dict[str, str]:
    """What a Parameters section says of each name."""
    parts = re.split(r"^(\*{0,2}\w+(?:, \*{0,2}\w+)*) : ", section, flags=re.MULTILINE)
    return {
        name: text
        for names, text in zip(parts[1::2], parts[2::2], strict=True)
        for name in names.split(", ")
    }


def says(text: str, unit: str) -> bool:
    """Whether a text names a unit as a word of its own."""
    return re.search(rf"(?<![\w/]){re.escape(unit)}(?![\w/])", " ".join(text.split())) is not None


@pytest.mark.parametrize("function", FUNCTIONS)
def test_a_unit_that_stands_in_a_name_stands_in_its_description(function):
    sections = sections_of(function)
    told = described(sections.get("Parameters", ""))

    silent = [
        name for name, text in told.items() if (unit := unit_in(name)) and not says(text, unit)
    ]
    unit = unit_in(function.__name__)
    if unit and not says(sections["Returns"], unit):
        silent.append("Returns")

    assert silent == []
