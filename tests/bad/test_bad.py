"""One input for each mistake: the whole message, beside controls that pass."""

import errno
import os
import tomllib
from pathlib import Path

import pytest

from lpview.blocks import InputError, read_model, read_model_bytes

FOLDER = Path(__file__).parent
MESSAGES = tomllib.loads((FOLDER / "messages.toml").read_text(encoding="utf-8"))
CONTROLS = {"control.csv": (2, 2, 4), "control-wide.csv": (2, 2, 3), "control-folder": (2, 2, 4)}
NOT_INPUT = {"messages.toml", "__init__.py", "__pycache__", Path(__file__).name}


@pytest.fixture(autouse=True)
def _in_this_folder(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(FOLDER)


def message(source: str | Path) -> str:
    with pytest.raises(InputError) as caught:
        read_model(source)
    return str(caught.value)


@pytest.mark.parametrize("name", MESSAGES)
def test_a_bad_input_draws_the_whole_message(name: str) -> None:
    assert message(name) == MESSAGES[name].rstrip("\n")


@pytest.mark.parametrize("name", CONTROLS)
def test_a_control_passes(name: str) -> None:
    model = read_model(name).model
    assert (model.m, model.n, model.A.nnz) == CONTROLS[name]


def test_every_file_here_is_asserted() -> None:
    assert {path.name for path in FOLDER.iterdir()} - NOT_INPUT - {*CONTROLS} <= {*MESSAGES}


@pytest.mark.parametrize("name", [name for name in MESSAGES if (FOLDER / name).is_file()])
def test_bytes_draw_the_same_message_under_their_own_name(name: str) -> None:
    with pytest.raises(InputError) as caught:
        read_model_bytes((FOLDER / name).read_bytes(), name)
    assert str(caught.value) == MESSAGES[name].rstrip("\n")


def test_the_file_is_named_as_the_user_named_it() -> None:
    whole = str(FOLDER / "number-nan.csv")
    assert message(whole) == MESSAGES["number-nan.csv"].rstrip("\n").replace(
        "number-nan.csv", whole, 1
    )
    dotted = "./folder-without-A"
    assert message(dotted).startswith("./folder-without-A/A.csv: expected")


def test_a_file_that_cannot_be_opened(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "loop.csv").symlink_to("loop.csv")
    monkeypatch.chdir(tmp_path)
    reason = os.strerror(errno.ELOOP)
    assert message("loop.csv") == f"loop.csv: expected a readable file, got '{reason}'"


def test_a_file_without_permission(monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(path: Path) -> bytes:
        raise PermissionError(errno.EACCES, "Permission denied", str(path))

    monkeypatch.setattr(Path, "read_bytes", refuse)
    expected = "control.csv: expected a readable file, got 'Permission denied'"
    assert message("control.csv") == expected
    lines = message("control-folder").splitlines()
    assert [line.split(":")[0] for line in lines] == [
        f"control-folder/{name}.csv" for name in ("c", "A", "b", "bounds")
    ]


def test_mistakes_are_counted_beyond_twenty() -> None:
    with pytest.raises(InputError) as caught:
        read_model("many.csv")
    assert len(caught.value.mistakes) == 25
    assert len(str(caught.value).splitlines()) == 21


def test_a_name_in_the_message_cannot_move_the_cursor() -> None:
    data = (FOLDER / "control.csv").read_bytes()
    with pytest.raises(InputError) as caught:
        read_model_bytes(data.replace(b"heat,basil", "h\x1b[2J\u202e,basil".encode()), "a\nb")
    assert str(caught.value) == ("a\\nb:14: [A] row: expected a row of [b], got 'h\\x1b[2J\\u202e'")
