"""Exit codes, and one line on stderr for whatever goes wrong."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time

import pytest
from cli_results import calibration

from assess.cli.main import cli
from assess.workflow import Options
from db.errors import BedstoneError


def one_line(text: str) -> bool:
    return text.endswith("\n") and text.count("\n") == 1 and "Traceback" not in text


@pytest.mark.parametrize(
    ("words", "told"),
    [
        ([], "bedstone --help"),
        (["bridge"], "bedstone bridge --help"),
        (["frobnicate"], "No such command 'frobnicate'"),
        (["calibrate"], "Missing argument 'BRIDGE'"),
        (["calibrate", "quillmere", "--frob"], "see 'bedstone calibrate --help'"),
        (["report", "quillmere"], "'-o' / '--output'"),
        (
            ["calibrate", "quillmere", "--visit", "14.5.2024"],
            "write it as YYYY-MM-DD, for example 2024-05-14",
        ),
        (["calibrate", "quillmere", "--visit", "20240514"], "YYYY-MM-DD"),
        (["calibrate", "quillmere", "--visit", "2024-02-30"], "no day of the calendar"),
        (["assess", "quillmere", "--visit", "2024-W20-2"], "YYYY-MM-DD"),
        (["calibrate", "quillmere", "--visit", "2024-05-14", "--all"], "--visit and --all"),
        (["calibrate", "quillmere", "--record", "x"], "--record stands before the command"),
    ],
)
def test_a_wrong_call_is_one_line_and_exit_2(bedstone, words, told):
    said = bedstone(*words)
    assert said.code == 2
    assert said.out == ""
    assert one_line(said.err)
    assert said.err.startswith("bedstone: ")
    assert told in said.err


def test_wrong_input_is_its_own_line_and_exit_2(bedstone, workflow):
    def refuse(url, path):
        raise BedstoneError(
            "is negative", file=str(path), field='girder "north", span 2', remedy='write for example "18 m"'
        )

    workflow(add_bridge=refuse)
    said = bedstone("bridge", "add", "broken.toml")
    assert said.code == 2
    assert (
        said.err == 'bedstone: broken.toml, girder "north", span 2: is negative; write for example "18 m"\n'
    )


def test_a_defect_is_one_line_and_exit_1(bedstone, workflow):
    def break_down(*args, **options):
        raise ZeroDivisionError("division\nby zero")

    workflow(trend=break_down)
    said = bedstone("trend", "quillmere")
    assert said.code == 1
    assert one_line(said.err)
    assert "a defect of the program: ZeroDivisionError: division by zero" in said.err
    assert "BEDSTONE_TRACEBACK=1" in said.err


def test_a_traceback_is_shown_to_whoever_asks_for_it(bedstone, workflow, monkeypatch):
    def break_down(*args, **options):
        raise ZeroDivisionError("division by zero")

    workflow(trend=break_down)
    monkeypatch.setenv("BEDSTONE_TRACEBACK", "1")
    said = bedstone("trend", "quillmere")
    assert said.code == 1
    assert "Traceback" in said.err
    assert "in break_down" in said.err
    assert said.err.splitlines()[-1].startswith("bedstone: a defect of the program")


def test_a_key_that_is_missing_still_gives_words(bedstone, workflow):
    def break_down(*args, **options):
        raise KeyError

    workflow(trend=break_down)
    assert "KeyError: no message" in bedstone("trend", "quillmere").err


def test_ctrl_c_is_exit_130_without_a_traceback(bedstone, workflow):
    def interrupted(*args, **options):
        raise KeyboardInterrupt

    workflow(assess=interrupted)
    said = bedstone("assess", "quillmere")
    assert said.code == 130
    assert said.err == "bedstone: stopped\n"


def test_a_real_interrupt_is_exit_130():
    code = (
        "import signal, time\n"
        "from assess import workflow\n"
        "from assess.cli.main import main\n"
        # a shell that starts the tests in the background has them ignore interrupts
        "signal.signal(signal.SIGINT, signal.default_int_handler)\n"
        "def wait(*args, **options):\n"
        "    print('waiting', flush=True)\n"
        "    time.sleep(30)\n"
        "workflow.assess = wait\n"
        "main()\n"
    )
    process = subprocess.Popen(
        [sys.executable, "-c", code, "assess", "quillmere"],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    assert process.stdout is not None
    assert process.stdout.readline() == "waiting\n"
    time.sleep(0.05)
    process.send_signal(signal.SIGINT)
    _, err = process.communicate(timeout=20)
    assert process.returncode == 130
    assert err == "bedstone: stopped\n"


@pytest.mark.parametrize("words", [["--help"], ["visit", "list", "quillmere", "--json"]])
def test_a_reader_that_leaves_is_no_complaint(words):
    code = (
        "import sys\n"
        "from assess import workflow\n"
        "from assess.cli.main import main\n"
        "workflow.list_visits = lambda url, bridge: []\n"
        "workflow.list_actions = lambda url, bridge: []\n"
        "sys.stdin.readline()\n"
        "main()\n"
    )
    reader, writer = os.pipe()
    process = subprocess.Popen(
        [sys.executable, "-c", code, *words],
        stdin=subprocess.PIPE,
        stdout=writer,
        stderr=subprocess.PIPE,
        text=True,
    )
    os.close(writer)
    os.close(reader)
    _, err = process.communicate("go\n", timeout=20)
    assert err == ""
    assert process.returncode == 141


def test_the_console_script_hands_on_the_exit_code():
    code = "from assess.cli.main import main; main()"
    done = subprocess.run(
        [sys.executable, "-c", code, "calibrate"], capture_output=True, text=True, check=False
    )
    assert done.returncode == 2
    assert done.stderr == "bedstone: Missing argument 'BRIDGE'; see 'bedstone calibrate --help'\n"


def test_a_word_that_stdout_cannot_write_is_replaced():
    code = (
        "from assess import workflow\n"
        "from assess.cli.main import main\n"
        "from db.records import BridgeSummary\n"
        "kept = BridgeSummary(bridge='b', name='H\\u00f8yn \\u6c34', revision=1, visits=0)\n"
        "workflow.list_bridges = lambda url: [kept]\n"
        "main()\n"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, "bridge", "list"],
        capture_output=True,
        encoding="latin-1",
        check=False,
        env={**os.environ, "PYTHONIOENCODING": "latin-1"},
    )
    assert done.returncode == 0, done.stderr
    assert "Høyn ?" in done.stdout


def test_the_record_is_taken_from_the_option_then_the_environment_then_the_folder(
    bedstone, workflow, monkeypatch
):
    seen = []

    def listed(url):
        seen.append(url)
        return []

    workflow(list_bridges=listed)
    bedstone("bridge", "list")
    monkeypatch.setenv("BEDSTONE_RECORD", "from-environment.sqlite")
    bedstone("bridge", "list")
    bedstone("--record", "postgresql://host/name", "bridge", "list")
    assert seen == ["bedstone.sqlite", "from-environment.sqlite", "postgresql://host/name"]


@pytest.mark.parametrize(
    ("words", "given"),
    [
        ([], {}),
        (["--all"], {"every": True}),
        (["--no-prior"], {"options": Options(prior=False)}),
        (
            ["--unknowns", "settlements,girder"],
            {"options": Options(unknowns=("pads", "settlements", "girder"))},
        ),
        (
            ["--without", "north/T1/deflection/6 m", "--reason", "gauge knocked"],
            {"options": Options(without=(("north/T1/deflection/6 m", "gauge knocked"),))},
        ),
        (["--compensating"], {"compensating": True}),
    ],
)
def test_the_options_of_calibrate_reach_the_workflow(bedstone, workflow, words, given):
    seen = {}

    def calibrate(url, bridge, **options):
        seen.update(options)
        return [calibration()]

    workflow(calibrate=calibrate)
    assert bedstone("calibrate", "quillmere", *words).code == 0
    plain = {"visit": None, "every": False, "options": Options(), "compensating": False}
    assert (plain | given).items() <= seen.items()


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--unknowns", "pads,bolts"], "'bolts' is no unknown"),
        (["--without", "north/T1/deflection/6 m"], "needs its reason"),
        (["--without", "a", "--reason", " "], "a --reason is empty"),
        (["--all", "--without", "a", "--reason", "b"], "--without belongs to one visit"),
    ],
)
def test_a_call_of_calibrate_that_cannot_be_meant_is_refused_in_one_line(bedstone, words, said):
    done = bedstone("calibrate", "quillmere", *words)
    assert done.code == 2
    assert said in done.err


def test_the_group_names_no_command_that_it_cannot_import():
    from click import Context

    for name in cli.list_commands(Context(cli)):
        assert cli.get_command(Context(cli), name) is not None
    assert cli.get_command(Context(cli), "main") is None
