from __future__ import annotations

import json
import subprocess
import sys

import pytest

from harvest import __version__
from harvest.cli import COMMANDS
from harvest.errors import CAUTION
from harvest.record import demo_names
from tests.cli.conftest import harvest

FEW = ("--draws", "2000")


def unwrapped(text):
    return " ".join(text.split())


@pytest.mark.parametrize("demo", sorted(demo_names()))
def test_the_main_job_on_every_demo(tmp_path, demo):
    folder, out = tmp_path / "mine", tmp_path / "out"
    made = harvest("new", folder, "--demo", demo)
    assert made.returncode == 0, made.stderr
    assert harvest("check", folder).returncode == 0
    done = harvest("quota", folder, "--out", out, "--json", out / "quota.json", *FEW)
    assert done.returncode == 0, done.stderr
    for heading in ("Quota table", "Lookup card", "Why this number", "Other quotas"):
        assert heading in done.stdout
    assert unwrapped(CAUTION) in unwrapped(done.stdout)
    assert sorted(p.name for p in out.iterdir()) == ["lookup_card.csv", "quota.json", "quota.xlsx", "quota_table.csv"]
    told = json.loads((out / "quota.json").read_text())
    assert told["headline"] in unwrapped(done.stdout)


def test_the_screen_shows_the_numbers_of_the_json(tmp_path, deer):
    done = harvest("quota", deer, "--json", tmp_path / "q.json", *FEW)
    told = json.loads((tmp_path / "q.json").read_text())
    quota = f"{told['recommendation']['quota']:,.0f}"
    assert f"Take at most {quota} red deer a year." in done.stdout
    row = next(line for line in done.stdout.splitlines() if line.strip().startswith("2028"))
    expected = told["quota_table"][2]
    assert f"{expected['abundance']:,.0f}" in row
    assert f"{expected['removals']:,.0f}" in row


@pytest.mark.parametrize("command", ["yield", "thresholds", "project", "quota"])
def test_every_command_prints_the_caution_and_is_reproducible(tmp_path, deer, command):
    results = []
    for seed in ("0", "0", "1"):
        file = tmp_path / f"{len(results)}.json"
        done = harvest(command, deer, "--seed", seed, "--json", file, *FEW)
        assert done.returncode == 0, done.stderr
        assert unwrapped(CAUTION) in unwrapped(done.stdout)
        results.append((done.stdout.replace(file.name, ""), file.read_bytes()))
    assert results[0] == results[1]
    assert results[0][1] != results[2][1]


@pytest.mark.parametrize("command", ["project", "quota"])
def test_json_is_byte_identical_on_one_and_two_threads(tmp_path, command):
    from harvest.record import demo_folder

    files = []
    for threads in (1, 2):
        file = tmp_path / f"{threads}.json"
        rule = "ramp lower=100 upper=200 share=0.15"
        arguments = (demo_folder("lake"), "--rule", rule, "--draws", "20000", "--threads", threads, "--json", file)
        assert harvest(command, *arguments).returncode == 0
        files.append(file.read_bytes())
    assert files[0] == files[1]


def test_the_environment_variable_sets_threads_and_is_checked(deer):
    assert harvest("project", deer, *FEW, HARVEST_THREADS="1").returncode == 0
    done = harvest("project", deer, *FEW, HARVEST_THREADS="many")
    assert done.returncode == 2
    assert "HARVEST_THREADS" in done.stderr


def test_a_broken_record_tells_all_its_problems_and_exits_with_2(tmp_path, deer):
    folder = tmp_path / "broken"
    assert harvest("new", folder, "--demo", "deer").returncode == 0
    text = (folder / "record.toml").read_text()
    text = text.replace("tolerance = 0.05", "tolerence = 0.05").replace("limit = 1200", "limit = 9200")
    (folder / "record.toml").write_text(text)
    for command in ("check", "quota"):
        done = harvest(command, folder)
        said = unwrapped(done.stdout + done.stderr)
        assert done.returncode == 2
        assert "tolerance" in said
        assert "objectives.target" in said
        assert "Traceback" not in said
    file = tmp_path / "check.json"
    assert harvest("check", folder, "--json", file).returncode == 2
    told = json.loads(file.read_text())
    assert told["usable"] is False
    assert told["record_digest"] is None
    assert len(told["problems"]) == 2


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (("quota", "{deer}", "--seed", "-1"), "seed -1"),
        (("quota", "{deer}", "--draws", "0"), "0 draws"),
        (("quota", "{deer}", "--threads", "0", *FEW), "0 threads"),
        (("quota", "{deer}", "--tolerance", "1.5", *FEW), "risk tolerance 1.5"),
        (("quota", "{deer}", "--tolerance", "nan", *FEW), "risk tolerance nan"),
        (("quota", "{deer}", "--horizon", "0", *FEW), "0"),
        (("quota", "{deer}", "--plan-years", "11", *FEW), "11 plan years"),
        (("quota", "{deer}", "--futures", "300", *FEW), "300 futures"),
        (("quota", "{deer}", "--question", "reduction", *FEW), "needs a ceiling"),
        (("project", "{deer}", "--years", "0", *FEW), "0 years"),
        (("project", "{deer}", "--rule", "slope share=0.1", *FEW), "no rule named 'slope'"),
        (("project", "{deer}", "--rule", "ramp lower=5 upper=1 share=0.1", *FEW), "lower must be below upper"),
        (("project", "{deer}", "--rule", "fixed share share=x", *FEW), "give a number"),
        (("project", "{deer}", "--rule", "fixed share", *FEW), "share is missing"),
        (("thresholds", "{deer}", "--quota", "-5", *FEW), "quota -5"),
        (("thresholds", "{deer}", "--quota", "nan", *FEW), "quota nan"),
        (("quota", "{tmp}/nowhere"), "no such folder"),
        (("new", "{tmp}/x", "--demo", "unicorn"), "unicorn"),
        (("new", "{deer}"), "deer"),
        (("quota", "{deer}", "--out", "/proc/nothing", *FEW), "cannot be written"),
        (("quota", "{deer}", "--json", "/proc/nothing/q.json", *FEW), "cannot be written"),
        (("quota",), "FOLDER"),
        (("harvest",), "No such command"),
    ],
)
def test_bad_input_ends_with_a_message_and_exit_status_2(tmp_path, deer, arguments, said):
    done = harvest(*(a.format(deer=deer, tmp=tmp_path) for a in arguments))
    assert done.returncode == 2, done.stdout + done.stderr
    assert said in unwrapped(done.stderr)
    assert "Traceback" not in done.stderr


def test_start_up_imports_only_what_the_command_needs(tmp_path, deer):
    def loaded(*arguments):
        code = (
            "import sys; from harvest.cli import group\n"
            f"try: group({list(map(str, arguments))!r})\n"
            "except SystemExit: pass\n"
            "print('LOADED', sorted({m.split('.')[0] for m in sys.modules}))"
        )
        out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
        return out.split("LOADED")[1]

    for arguments in (("--help",), ("new", tmp_path / "a"), ("check", deer), ("keys",)):
        modules = loaded(*arguments)
        assert not any(f"'{m}'" in modules for m in ("numba", "numpy", "pandas", "scipy", "openpyxl")), arguments
    assert "'openpyxl'" not in loaded("project", deer, *FEW)


def test_help_names_every_command_and_the_version(deer):
    said = harvest("--help").stdout
    assert all(command in said for command in COMMANDS)
    assert unwrapped(CAUTION) in unwrapped(said)
    assert harvest("--version").stdout.strip().endswith(__version__)
    for command in COMMANDS:
        told = harvest(command, "--help")
        assert told.returncode == 0
        if command == "app":  # it draws with the defaults and writes no file of its own
            continue
        assert "--seed" in told.stdout
        assert "--json" in told.stdout


def test_the_first_run_says_that_it_compiles_and_shows_progress(tmp_path, deer):
    first = harvest("quota", deer, *FEW, HARVEST_CACHE=str(tmp_path))
    assert first.returncode == 0
    assert "First run on this machine: compiling" in first.stderr
    assert "computing: risk against quota" in first.stderr
    again = harvest("quota", deer, *FEW, HARVEST_CACHE=str(tmp_path))
    assert "compiling" not in again.stderr
    assert again.stdout == first.stdout


@pytest.mark.parametrize(
    ("old", "new", "sound"),
    [("2024,800,11150", "2024,800,11150", True), ("2025,900,10920", "2025,,", False)],
    ids=["whole", "removals missing since the count"],
)
def test_check_says_whether_a_quota_can_be_worked_out(tmp_path, old, new, sound):
    folder, file = tmp_path / "mine", tmp_path / "c.json"
    assert harvest("new", folder, "--demo", "geese").returncode == 0
    text = (folder / "history.csv").read_text()
    assert old in text
    (folder / "history.csv").write_text(text.replace(old, new))
    done = harvest("check", folder, "--json", file)
    assert done.returncode == 0
    told = json.loads(file.read_text())
    assert (told["usable"], told["supports_quota"]) == (True, sound)
    assert ("cannot be worked out yet" in done.stdout) is not sound
    assert (harvest("quota", folder, *FEW).returncode == 0) is sound


def test_files_are_written_though_nobody_reads_the_screen(tmp_path, deer):
    out = tmp_path / "out"
    with subprocess.Popen(
        [sys.executable, "-m", "harvest", "quota", str(deer), "--out", str(out), *FEW],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    ) as process:
        process.stdout.close()
        process.stderr.read()
        process.wait(timeout=60)
    assert (out / "quota.xlsx").stat().st_size > 5000


def test_a_name_that_the_terminal_cannot_show_does_not_stop_the_work(tmp_path):
    folder = tmp_path / "elk"
    assert harvest("new", folder, "--demo", "deer").returncode == 0
    text = (folder / "record.toml").read_text(encoding="utf-8").replace("red deer", "łoś")
    (folder / "record.toml").write_text(text, encoding="utf-8")
    done = harvest("quota", folder, *FEW, PYTHONIOENCODING="cp1252")
    assert done.returncode == 0, done.stderr
