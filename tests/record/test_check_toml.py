"""Every fault of record.toml is found, placed and explained."""

from __future__ import annotations

import pytest

from harvest.record.fields import FIELDS

from .edits import CSV, TOML, edited, problems_of, told

GROWTH = 'max_growth = { distribution = "uniform", low = 0.2, high = 0.4 }'
CAPACITY = 'carrying_capacity = { distribution = "90% between", low = 800, high = 1500 }'
LOGISTIC = '[[curve]]\nname = "logistic"\n'
SURVIVAL = '[life]\nadult_survival = 0.85\n[[curve]]\nname = "ricker"\n'
TO_ONE = '[[curve]]\nname = "ricker"\nshape = { distribution = "90% between", low = 0.8, high = 1.0 }\n'


def test_the_text_to_edit_is_sound() -> None:
    assert problems_of() == ()


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        # the top of the file
        ("format = 1", "", ["format", "found nothing", "Add format"]),
        ("format = 1", "format = 0", ["format: found 0"]),
        ("format = 1", 'format = "1"', ["format", "without quotes"]),
        ("format = 1", "format = true", ["format: found true"]),
        ("format = 1", "format = 2", ["format: found 2", "update the program"]),
        ('name = "Test herd"', 'name = "  "', ["name:", "must not be empty"]),
        ('name = "Test herd"', 'name = "a\\nb"', ["name:", "one line"]),
        ('name = "Test herd"', 'name = "a\\u0007b"', ["name:", "control characters", "U+0007"]),
        ('name = "Test herd"', f'name = "{"x" * 5001}"', ["name:", "5,000"]),
        ('name = "Test herd"', "name = 3", ["name: found 3", "quotes"]),
        ('unit = "animals"', 'unit = "animal"', ["unit:", 'Was "animals" meant?']),
        ('unit = "animals"', 'unit = "kilograms"', ["unit:", '"animals" or "tonnes"']),
        ('season = "short"', 'season = "all year"', ["count_when:", 'it must be "start"']),
        ('count_when = "before"', 'count_when = "start"', ["count_when:", '"before" or "after"']),
        ('count_when = "before"', 'count_when = "after"', ["lag: found 0", "at least 1"]),
        ("lag = 0", "lag = 6", ["lag: found 6", "from 0 to 5"]),
        ("lag = 0", "lag = 1.0", ["lag: found 1", "without a decimal point"]),
        ("lag = 0", "lag = true", ["lag: found true"]),
        ("lag = 0", 'lag = 0\nhistory = "../history.csv"', ["history:", "own folder"]),
        ("lag = 0", 'lag = 0\nhistory = "/etc/passwd"', ["history:", "own folder"]),
        ("lag = 0", 'lag = 0\nhistory = "C:history.csv"', ["history:", "own folder"]),
        ("lag = 0", 'lag = 0\nhistory = "sub\\\\history.csv"', ["history:", "own folder"]),
        ("lag = 0", 'lag = 0\nhistory = ".."', ["history:", "own folder"]),
        ("lag = 0", 'lag = 0\nhistory = "history.xlsx"', ["history:", ".csv"]),
        ("lag = 0", 'lag = 0\nhistory = "a\\u0000.csv"', ["history:", "control characters"]),
        ("lag = 0", "lag = 0\nfirst_quota_year = 2022", ["first_quota_year: found 2022", "from 2023", "to 2029"]),
        ("lag = 0", "lag = 0\nfirst_quota_year = 2030", ["first_quota_year: found 2030"]),
        ("lag = 0", "lag = 0\npresent_quota = -1", ["present_quota: found -1", "at least 0"]),
        ("lag = 0", "lag = 0\npresent_quota = inf", ["present_quota: found inf"]),
        ("lag = 0", "lag = 0\npresent_quota = nan", ["present_quota: found nan"]),
        ("lag = 0", 'lag = 0\npresent_quota = "1,200"', ["present_quota:", "Write 1200", "without quotes"]),
        ("lag = 0", "lag = 0\npresent_quota = 1e16", ["present_quota:"]),
        ("lag = 0", "lag = 0\nspecie = 'deer'", ["specie", "unknown", "Was species meant?"]),
        ("lag = 0", "lag = 0\nlimit = 300", ["limit", "belongs in [objectives]"]),
        ("lag = 0", "lag = 0\n[objectivs]\nlimit = 3", ["objectivs", "Was objectives meant?"]),
        # surveys
        ('column = "ground"', "", ["survey 1, column", "found nothing"]),
        ('column = "pellets"', 'column = "ground"', ["survey 2, column", "of its own"]),
        ('name = "pellets"', 'name = "ground"', ["survey 2, name", "of its own"]),
        ('column = "pellets"', 'column = "note"', ["survey 2, column", "something else"]),
        ('column = "pellets"', 'column = "=sum"', ["survey 2, column", "begins with a letter"]),
        ('cv_column = "ground_cv"', 'cv_column = "pellets"', ["survey 1, cv_column", "something else"]),
        ('cv_column = "ground_cv"', "", ["survey 1:", "neither cv nor cv_column"]),
        ("cv = 0.3", 'cv = 0.3\ncv_column = "ground_cv"', ["survey 2:", "both cv and cv_column"]),
        ("cv = 0.3", "cv = 15", ["survey 2, cv: found 15", "Was 0.15 (15 percent) meant?"]),
        ("cv = 0.3", 'cv = "15%"', ["survey 2, cv", "Was 0.15 meant?"]),
        ("cv = 0.3", "cv = 0", ["survey 2, cv: found 0", "above 0"]),
        ("cv = 0.3", "cv = -0.1", ["survey 2, cv", "above 0"]),
        ("cv = 0.3", 'cv = 0.3\nwhen = "start"', ["survey 2, when", '"before" or "after"']),
        ("cv = 0.3", "cv = 0.3\nbias = 0", ["survey 2, bias: found 0"]),
        ('kind = "index"', 'kind = "relative"', ["survey 2, kind"]),
        ("[[survey]]\nname", "[survey]\nname", ["line", "[[…]]"]),
        # curves and rates
        (LOGISTIC, "", ["curve", "at least 1 [[curve]]"]),
        (LOGISTIC, LOGISTIC * 2, ["curve 2, name", "each curve stands once"]),
        (LOGISTIC, LOGISTIC + "weight = 0\n", ["curve 1, weight: found 0"]),
        (LOGISTIC, LOGISTIC + "shape = 2\n", ["curve 1, shape", '"logistic" has no shape']),
        (LOGISTIC, '[[curve]]\nname = "allee"\n', ["curve 1, shape", 'needed for "allee"', "below 1"]),
        (LOGISTIC, '[[curve]]\nname = "theta-logistic"\n', ["curve 1, shape", "needed"]),
        (LOGISTIC, '[[curve]]\nname = "theta-logistic"\nshape = 0\n', ["curve 1, shape: found 0"]),
        (LOGISTIC, '[[curve]]\nname = "allee"\nshape = 1\n', ["curve 1, shape: found 1", "below 1"]),
        (LOGISTIC, '[[curve]]\nname = "gompertz"\nshape = 1.5\n', ["curve 1, shape: found 1.5"]),
        (LOGISTIC, '[[curve]]\nname = "gompertz"\nshape = 0.5\nmax_growth = 0.2\n', ["both shape and max_growth"]),
        (LOGISTIC, '[[curve]]\nname = "gompertz"\ngrowth_rate = 0.2\n', ["no growth_rate"]),
        (LOGISTIC, '[[curve]]\nname = "ricker"\n', ["curve 1, shape", "survival of adults", "at least 0 and below 1"]),
        (LOGISTIC, '[[curve]]\nname = "beverton-holt"\n', ["curve 1, shape", "survival of adults", "is needed"]),
        (LOGISTIC, SURVIVAL, ["curve 1, shape: found nothing", "shape = 0.85", "[life]"]),
        (LOGISTIC, edited(SURVIVAL, "0.85", "1"), ["curve 1, shape: found nothing", "at least 0 and below 1"]),
        (LOGISTIC, '[[curve]]\nname = "ricker"\nshape = 1\n', ["curve 1, shape: found 1", "below 1"]),
        (LOGISTIC, '[[curve]]\nname = "beverton-holt"\nshape = -0.1\n', ["curve 1, shape: found -0.1", "at least 0"]),
        (LOGISTIC, TO_ONE, ["curve 1, shape", "inside 0 and 1"]),
        (LOGISTIC, '[[curve]]\nname = "riker"\nshape = 0.5\n', ["curve 1, name", 'Was "ricker" meant?']),
        (LOGISTIC, '[[curve]]\nname = "logistik"\n', ["curve 1, name", 'Was "logistic" meant?']),
        (LOGISTIC, LOGISTIC + "growth_rate = 0.1\nmax_growth = 0.1\n", ["curve 1", "both growth_rate and max"]),
        (GROWTH, GROWTH + "\ngrowth_rate = 0.3", ["rates:", "both growth_rate and max_growth"]),
        (GROWTH, "", ["curve 1 (logistic)", "neither growth_rate nor max_growth"]),
        (CAPACITY, "", ["curve 1 (logistic)", "no carrying_capacity"]),
        ("process_noise = 0.1", "", ["curve 1 (logistic)", "no process_noise"]),
        ("process_noise = 0.1", "process_noise = -0.1", ["rates.process_noise"]),
        ("process_noise = 0.1", "process_noise = 0.1\nautocorrelation = 1", ["rates.autocorrelation", "below 1"]),
        (
            "process_noise = 0.1",
            "process_noise = 0.1\nlow_abundance = 5",
            ["rates.low_abundance", "Was 0.05 meant?"],
        ),
        # distributions
        ("low = 0.2, high = 0.4", "low = 0.4, high = 0.2", ["rates.max_growth", "low must be below high"]),
        ("low = 0.2, high = 0.4", "low = 0.2", ["rates.max_growth.high", "Add high"]),
        ("low = 0.2, high = 0.4", 'low = "0,2", high = 0.4', ["rates.max_growth.low"]),
        ("low = 0.2, high = 0.4", "low = 0.2, hihg = 0.4", ["unknown parameter", "Was high meant?"]),
        ("low = 0.2, high = 0.4", "low = -0.2, high = 0.4", ["rates.max_growth", "Correct -0.2"]),
        ("low = 0.2, high = 0.4", "low = 20, high = 40", ["rates.max_growth", "not percentages"]),
        ('"uniform", low = 0.2, high = 0.4', '"unifrom", low = 0.2, high = 0.4', ['Was "uniform" meant?']),
        ('"uniform", low', '"triangular", mode = 0.5, low', ["mode must lie between"]),
        ('"uniform", low = 0.2, high = 0.4', '"normal", mean = 0.3, sd = 0', ["sd must be above 0"]),
        ('"uniform", low = 0.2, high = 0.4', '"normal", mean = -1, sd = 1', ["rates.max_growth", "Correct -1"]),
        ('"uniform", low = 0.2, high = 0.4', '"lognormal", median = 0.3, sd_log = -1', ["sd_log must be"]),
        ('"uniform", low = 0.2, high = 0.4', '"lognormal", median = 0.3, sd_log = 20', ["sd_log must be at most"]),
        ('"uniform", low = 0.2, high = 0.4', '"beta", a = 0, b = 2', ["a must be above 0"]),
        ('"uniform", low = 0.2, high = 0.4', '"90% between", low = 0, high = 0.4', ["above 0", "triangular"]),
        ('"uniform", low = 0.2, high = 0.4', '"fixed", value = -1', ["rates.max_growth.value: found -1"]),
        (GROWTH, "max_growth = {}", ["rates.max_growth.distribution: found nothing"]),
        (GROWTH, 'max_growth = "high"', ["rates.max_growth", "without quotes"]),
        # objectives
        ("limit = 300", "limit = 700", ["objectives.target", "target must not be below limit"]),
        ("limit = 300", "limit = 300\ncollapse = 400", ["objectives.limit", "limit must not be below collapse"]),
        ("target = 600", "target = 600\nceiling = 500", ["objectives.ceiling", "not be below target"]),
        ("limit = 300", "limit = { of_capacity = 30 }", ["objectives.limit: found 30", "of_capacity = 0.3"]),
        ("limit = 300", "limit = { capacity = 0.3 }", ["objectives.limit"]),
        ("limit = 300", "limit = 0", ["objectives.limit: found 0"]),
        ("limit = 300", "limit = 300\nhorizon = 0", ["objectives.horizon", "from 1 to 200"]),
        ("limit = 300", "limit = 300\nplan_years = 11", ["objectives.plan_years"]),
        ("limit = 300", "limit = 300\ntolerance = 1", ["objectives.tolerance", "below 1"]),
        ("limit = 300", "limit = 300\ntolerance = 5", ["objectives.tolerance", "Was 0.05 meant?"]),
        ("limit = 300", "limit = 300\nrecovery_factor = 0.05", ["objectives.recovery_factor"]),
        ("limit = 300", "limit = 300\nrecovery = { years = 10, chance = 1 }", ["objectives.recovery.chance"]),
        ("limit = 300", "limit = 300\nrecovery = { years = 0, chance = 0.8 }", ["objectives.recovery.years"]),
        ("limit = 300", "limit = 300\nrecovery = { year = 1, chance = 0.8 }", ["objectives.recovery"]),
        ("limit = 300", "limit = 300\nreduction = { years = 9, chance = 0.8 }", ["reduction needs ceiling"]),
        # rule
        ("share = 0.1", "", ["rule.share", 'needed for "ramp"']),
        ("share = 0.1", "share = 10", ["rule.share", "Was 0.1 meant?"]),
        ("share = 0.1", "share = 0", ["rule.share"]),
        ("share = 0.1", "share = 0.1\nquota = 3", ["rule.quota", '"ramp" has no quota']),
        ("share = 0.1", "share = 0.1\nwithout_count = 1.5", ["rule.without_count"]),
        ("lower = 300", "lower = 600", ["rule.lower", "lower must be below upper"]),
        ('name = "ramp"', 'name = "threshold"', ["rule.name"]),
        ('name = "ramp"', "", ["rule.name", "found nothing"]),
        # tables of the wrong kind
        ("[rule]", "[[rule]]", ["rule: found a list of 1", "[rule]"]),
        ("[objectives]", "[objectives]\n[life]\nadult_survival = 1.2\n[objectives.x]", ["life.adult_survival"]),
    ],
)
def test_an_error_is_found(old: str, new: str, words: list[str]) -> None:
    assert told(problems_of(edited(TOML, old, new)), "error", *words)


@pytest.mark.parametrize(
    ("more", "words"),
    [
        ('between = ["max_growth", "carrying_capcity"]\nvalue = 0.1', ["Was carrying_capacity meant?"]),
        ('between = ["max_growth", "shape"]\nvalue = 0.1', ["must be stated"]),
        ('between = ["max_growth", "max_growth"]\nvalue = 0.1', ["two different rates"]),
        ('between = ["max_growth"]\nvalue = 0.1', ["two different rates"]),
        ("between = []\nvalue = 0.1", ["an empty list", "two different rates"]),
        ('between = "max_growth"\nvalue = 0.1', ["correlation 1, between"]),
        ('between = ["max_growth", "carrying_capacity"]\nvalue = 1', ["correlation 1, value", "below 1"]),
        ('between = ["max_growth", "carrying_capacity"]', ["correlation 1, value", "found nothing"]),
        (
            'between = ["max_growth", "carrying_capacity"]\nvalue = 0.1\n'
            '[[correlation]]\nbetween = ["carrying_capacity", "max_growth"]\nvalue = 0.2',
            ["each pair of rates stands once"],
        ),
        (
            'between = ["max_growth", "carrying_capacity"]\nvalue = 0.9\n'
            '[[correlation]]\nbetween = ["carrying_capacity", "process_noise"]\nvalue = 0.9\n'
            '[[correlation]]\nbetween = ["max_growth", "process_noise"]\nvalue = -0.9',
            ["contradict each other", "closer to 0"],
        ),
    ],
)
def test_impossible_correlations_are_found(more: str, words: list[str]) -> None:
    assert told(problems_of(f"{TOML}\n[[correlation]]\n{more}\n"), "error", "correlation", *words)


def both_growths(*values: float) -> str:
    """A record whose curves state growth under either name, each correlated with carrying capacity."""
    text = edited(TOML, LOGISTIC, '[[curve]]\nname = "logistic"\ngrowth_rate = 0.3\n\n[[curve]]\nname = "fox"\n')
    for name, value in zip(("growth_rate", "max_growth"), values, strict=True):
        text += f'[[correlation]]\nbetween = ["{name}", "carrying_capacity"]\nvalue = {value}\n'
    return text


def test_growth_has_one_correlation_under_its_two_names() -> None:
    found = problems_of(both_growths(-0.3, 0.3))
    assert told(found, "error", "correlation 2, between", "max_growth", "0.3, elsewhere -0.3", "one rate under two")
    assert problems_of(both_growths(-0.3, -0.3)) == ()
    more = '[[correlation]]\nbetween = ["growth_rate", "max_growth"]\nvalue = 0.9\n'
    found = problems_of(both_growths(-0.3, -0.3) + more)
    assert told(found, "error", "correlation 3, between", "one rate under two names", "Take the correlation out")


def test_a_contradiction_between_the_two_names_of_growth_is_found() -> None:
    """As one rate they cannot be; four rates in a chain with the same values could."""
    text = edited(both_growths(0.8, 0.8), "carrying_capacity = {", "autocorrelation = 0.1\ncarrying_capacity = {")
    text = edited(
        text, '"max_growth", "carrying_capacity"]\nvalue = 0.8', '"max_growth", "process_noise"]\nvalue = -0.8'
    )
    text += '[[correlation]]\nbetween = ["carrying_capacity", "process_noise"]\nvalue = 0.2\n'
    assert told(problems_of(text), "error", "correlation", "contradict each other")
    assert problems_of(edited(text, '["growth_rate", "carrying', '["autocorrelation", "carrying')) == ()


def test_a_recovery_without_a_limit_is_found_even_with_a_target() -> None:
    text = edited(TOML, "limit = 300\n", "recovery = { years = 10, chance = 0.8 }\n")
    assert told(problems_of(text), "error", "objectives.recovery", "recovery needs limit", "Add limit")


def test_possible_correlations_pass() -> None:
    more = '[[correlation]]\nbetween = ["max_growth", "carrying_capacity"]\nvalue = 0.6\n'
    more += '[[correlation]]\nbetween = ["carrying_capacity", "process_noise"]\nvalue = 0.6\n'
    assert problems_of(f"{TOML}\n{more}") == ()


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("cv = 0.3", "cv = 1.5", ["survey 2, cv", "Unusual"]),
        ("cv = 0.3", "cv = 0.005", ["survey 2, cv", "Unusual"]),
        ("cv = 0.3", "cv = 0.3\nbias = 0.9", ["survey 2, bias", "not be used"]),
        ("limit = 300", "limit = 0.3", ["objectives.limit", "{ of_capacity = 0.3 }"]),
        ('"uniform", low = 0.2, high = 0.4', '"normal", mean = 0.1, sd = 0.1', ["rates.max_growth", "impossible"]),
        ('kind = "absolute"', 'kind = "index"', ["survey", "no absolute count"]),
    ],
)
def test_a_warning_is_given(old: str, new: str, words: list[str]) -> None:
    problems = problems_of(edited(TOML, old, new))
    assert told(problems, "warning", *words)
    assert not told(problems, "error")


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("limit = 300", "limit = { of_capacity = 0.9 }"),  # not comparable with an absolute target
        ("lag = 0", "lag = 0\nfirst_quota_year = 2023"),
        ("lag = 0", "lag = 0\nfirst_quota_year = 2023\nspecies = 'a'\nhistory = 'history.csv'"),
        (LOGISTIC, LOGISTIC + "growth_rate = 0.3\n"),  # a curve's own growth stands for the shared one
        (LOGISTIC, '[[curve]]\nname = "gompertz"\n'),
        (LOGISTIC, '[[curve]]\nname = "gompertz"\nshape = 0.5\n'),
        (LOGISTIC, '[[curve]]\nname = "ricker"\nshape = 0\n'),
        (LOGISTIC, TO_ONE.replace("1.0", "0.95")),
        (LOGISTIC, '[[curve]]\nname = "beverton-holt"\nshape = { distribution = "uniform", low = 0, high = 1 }\n'),
        (GROWTH, "growth_rate = 0.3"),
        ("process_noise = 0.1", "process_noise = 0"),
        ("cv = 0.3", 'cv = 0.3\nwhen = "after"'),
    ],
)
def test_a_sound_change_passes(old: str, new: str) -> None:
    assert problems_of(edited(TOML, old, new)) == ()


def test_mean_of_year_is_for_an_index_only() -> None:
    toml = edited(edited(TOML, '"short"', '"all year"'), '"before"', '"start"')
    mean = edited(toml, 'kind = "absolute"', 'kind = "absolute"\nwhen = "mean of year"')
    assert told(problems_of(mean), "error", "survey 1, when", "index only")
    index = edited(mean, 'kind = "absolute"', 'kind = "index"')
    assert not [p for p in problems_of(index) if p.severity == "error"]
    record = edited(toml, 'count_when = "start"', 'count_when = "mean of year"')
    assert told(problems_of(record), "error", "count_when", "mean of year")


def test_an_absolute_count_happens_when_the_record_says() -> None:
    toml = edited(edited(TOML, 'kind = "absolute"', 'kind = "absolute"\nwhen = "after"'), "lag = 0", "lag = 1")
    assert told(problems_of(toml), "error", "survey 1, when", "count_when")


def test_numbers_that_show_in_the_results_cannot_be_private() -> None:
    assert told(problems_of(TOML + '[private]\nfields = ["present_quota"]\n'), "error", "private.fields")


def test_demographic_noise_in_tonnes_needs_a_body_mass() -> None:
    toml = edited(edited(TOML, '"animals"', '"tonnes"'), "process_noise", "demographic_noise = 0.5\nprocess_noise")
    assert told(problems_of(toml), "error", "rates.demographic_noise", "body_mass")
    assert problems_of(toml + "[life]\nbody_mass = 12\n") == ()


def test_a_record_without_any_survey_is_only_warned_of() -> None:
    toml = TOML[: TOML.index("[[survey]]")] + TOML[TOML.index("[[curve]]") :]
    csv = "year,removals\n2019,80\n2020,85\n2021,90\n"
    assert told(problems_of(toml, csv), "warning", "no absolute count")
    assert not told(problems_of(toml, csv), "error")


def test_private_fields_must_exist() -> None:
    assert told(problems_of(TOML + '[private]\nfields = ["plan.autor"]\n'), "error", "Was plan.author meant?")
    assert told(problems_of(TOML + '[private]\nfields = ["place", "place"]\n'), "error", "named once")
    assert problems_of(TOML + '[private]\nfields = ["place", "plan", "history.note"]\n') == ()


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("lag = 0,5", ["line 6", "with a point"]),
        ("lag = zero", ["line 6", "texts in quotes"]),
        ("lag", ["line 6", "key = value"]),
        ("lag = 0\nlag = 1", ["line 7", "only once"]),
        ("lag = “0”", ["line 6", "straight quotes"]),
        ("lag = " + "9" * 5000, ["too many digits"]),
        ("lag = " + "[" * 5000, ["nested too deeply"]),
        ("lag = 0\n" + "a." * 5000 + "a = 1", ["nested too deeply"]),
    ],
)
def test_a_syntax_error_is_placed(line: str, words: list[str]) -> None:
    assert told(problems_of(edited(TOML, "lag = 0", line)), "error", *words)


def test_all_faults_are_found_in_one_pass() -> None:
    toml = edited(edited(edited(TOML, "lag = 0", "lag = 9"), "share = 0.1", "share = 2"), "cv = 0.3", "cv = 30")
    csv = edited(edited(CSV, "2021,90", "2021,x"), "2022,90", "2022,-3")
    problems = problems_of(toml, csv)
    assert [p.where for p in problems if p.severity == "error"] == [
        "lag",
        "survey 2, cv",
        "rule.share",
        "row 4 (year 2021), column removals",
        "row 5 (year 2022), column removals",
    ]


def test_a_faulty_history_is_told_even_when_the_toml_cannot_be_read() -> None:
    problems = problems_of("name =", edited(CSV, "2021,90", "2021,nd"))
    assert told(problems, "error", "record.toml", "line 1")
    assert told(problems, "error", "history.csv", "row 4 (year 2021), column removals")
    assert not told(problems, "error", "unknown column")


def test_many_unknown_keys_are_summed_up() -> None:
    more = "\n".join(f"odd_{n} = {n}" for n in range(3000))
    problems = problems_of(edited(TOML, "lag = 0", f"lag = 0\n{more}"))
    assert len(problems) == 21
    assert told(problems, "error", "2,980 more unknown keys")


def test_every_example_passes_its_own_check() -> None:
    from harvest.record.reporting import Report
    from harvest.record.values import FAULTY, check_value

    for field in FIELDS:
        report = Report("record.toml")
        assert check_value(field, field.example, field.path, report) is not FAULTY, report.problems
        assert field.help.endswith(".")
        assert field.rule()
