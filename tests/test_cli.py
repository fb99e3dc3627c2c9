"""The command line and the model files."""

import tomllib
from fractions import Fraction

import numpy as np
import pytest

import plasmalin as plin
from plasmalin.cli import main
from plasmalin.declare.files import example_names, example_path, read_model_file
from plasmalin.declare.writing import write_whole

MODEL = """
[model]
title = "sound"
axes = "x"

[parameters]
rho_0 = 1.2
p_0 = { value = 1.0e5 }

[[scalar]]
name = "rho"
background = "rho_0"

[[vector]]
name = "v"

[[law]]
name = "continuity"
text = "partial_t(rho) + div(rho*v) = 0"

[[law]]
name = "momentum"
text = "rho*(partial_t(v) + advect(v, v)) = -grad(p_0*(rho/rho_0)^(7/5))"

[wave]
direction = "x"

[sweep]
k = { from = 1.0, to = 10.0, points = 5 }
"""


@pytest.fixture
def file(tmp_path):
    path = tmp_path / "sound.toml"
    path.write_text(MODEL, encoding="utf-8")
    return path


def test_derive_writes_everything(file, tmp_path, capsys):
    out = tmp_path / "out"
    assert main(["derive", str(file), "--out", str(out)]) == 0
    assert sorted(p.name for p in out.iterdir()) == [
        "branches.csv",
        "branches.npz",
        "branches.png",
        "derivation.md",
    ]
    printed = capsys.readouterr().out
    assert "∂_t ρ̃ + ρ_0 ∇·ṽ = 0" in printed
    assert "No branch grows" in printed
    assert "licensed practice" in printed
    table = np.loadtxt(out / "branches.csv", delimiter=",", skiprows=1)
    assert table.shape == (10, 5)
    assert np.allclose(np.abs(table[:, 2]), table[:, 1] * np.sqrt(1.4 * 1e5 / 1.2), rtol=1e-14)
    text = (out / "derivation.md").read_text(encoding="utf-8")
    for heading in (
        "Nonlinear laws",
        "Background",
        "Linearized laws",
        "Every term",
        "Dispersion relation",
        "Branches",
    ):
        assert f"## {heading}" in text


def test_derive_without_sweep(file, tmp_path, capsys):
    file.write_text(MODEL.partition("[sweep]")[0], encoding="utf-8")
    assert main(["derive", str(file), "--out", str(tmp_path / "o")]) == 0
    assert [p.name for p in (tmp_path / "o").iterdir()] == ["derivation.md"]
    assert "Branches" not in capsys.readouterr().out


@pytest.mark.parametrize("name", example_names())
def test_examples(name, tmp_path, capsys):
    assert main(["derive", name, "--out", str(tmp_path)]) == 0
    assert (tmp_path / "branches.png").stat().st_size > 10_000
    assert "invented" in example_path(name).read_text(encoding="utf-8")
    file = read_model_file(example_path(name))
    assert file.model.linearize().audit().passed
    capsys.readouterr()


def test_the_plume_is_unstable():
    wave = (
        plin.load_example("xenon-iodine-plume")
        .linearize()
        .plane_wave(("k*sin(theta)", "k*cos(theta)"))
    )
    roots = wave.roots(k=5e3)
    grow = roots.omega[roots.imag.argmax()]
    assert grow.imag > 0.3 * grow.real > 0


def test_example_listing_and_copy(tmp_path, capsys):
    assert main(["example"]) == 0
    assert "xenon-iodine-plume: " in capsys.readouterr().out
    assert main(["example", "xenon-iodine-plume", "--out", str(tmp_path / "mine.toml")]) == 0
    assert plin.load(tmp_path / "mine.toml").title.startswith("xenon")
    assert main(["example", "nothing"]) == 1
    assert "no example 'nothing'" in capsys.readouterr().err
    assert main(["example", "electronegative-dusty-edge"]) == 0
    assert tomllib.loads(capsys.readouterr().out)["model"]["axes"] == "x"


def test_command_at_fault():
    with pytest.raises(SystemExit) as caught:
        main(["derive"])
    assert caught.value.code == 2


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("[model]", "[modell]", "unknown entry 'modell'; did you mean 'model'"),
        ('title = "sound"', "", r"\[model\]: 'title' must be a text"),
        ("rho_0 = 1.2", 'rho_0 = "thick"', r"\[parameters\] rho_0: 'thick' is not a finite number"),
        ("rho_0 = 1.2", "rho_0 = nan", "is not a finite number"),
        (
            "{ value = 1.0e5 }",
            '{ value = 1.0, unit = "furlong" }',
            "unit .furlong.: .furlong. is not a known unit",
        ),
        ("{ value = 1.0e5 }", "{ amount = 1.0 }", "unknown entry 'amount'"),
        ("div(rho*v)", "dif(rho*v)", "no operator or function 'dif'"),
        ("div(rho*v)", "div(rho)", r"law 'continuity': div\(\) got the scalar"),
        ('background = "rho_0"', "background = true", "is not a number or a text"),
        ('background = "rho_0"', 'backgruond = "rho_0"', "did you mean 'background'"),
        ('name = "v"', 'name = "rho"', "field 'rho' is declared already"),
        ("points = 5", "points = 0", "not a whole number from 1"),
        ("points = 5", 'spacing = "cubic"', 'give "linear" or "log"'),
        ("from = 1.0", 'spacing = "log", from = 0', "log spacing needs positive ends"),
        ("k = {", "j = 3\nk = {", "one quantity varies, 2 are given"),
        ('direction = "x"', 'towards = "x"', r"\[wave\]: unknown entry 'towards'"),
        ('axes = "x"', 'axes = "yx"', "axes='yx'"),
        ("[[law]]", "[law]", "TOML"),
        ('title = "sound"', 'title = "sound', "not a TOML file"),
    ],
)
def test_file_at_fault(file, tmp_path, capsys, old, new, message):
    import re

    file.write_text(MODEL.replace(old, new, 1), encoding="utf-8")
    out = tmp_path / "out"
    assert main(["derive", str(file), "--out", str(out)]) == 1
    printed = capsys.readouterr()
    assert re.search(message, printed.err), printed.err
    assert printed.out == ""
    assert not out.exists()


def test_unreadable_files(tmp_path):
    with pytest.raises(plin.ModelFileError, match="cannot read"):
        plin.load(tmp_path / "missing.toml")
    (tmp_path / "binary.toml").write_bytes(bytes(range(256)))
    with pytest.raises(plin.ModelFileError, match="not a TOML file"):
        plin.load(tmp_path / "binary.toml")
    (tmp_path / "huge.toml").write_bytes(b"#" * 2_000_000)
    with pytest.raises(plin.ModelFileError, match="larger than"):
        plin.load(tmp_path / "huge.toml")
    (tmp_path / "deep.toml").write_text("a = " + "[" * 50_000, encoding="utf-8")
    with pytest.raises(plin.ModelFileError, match="not a TOML file"):
        plin.load(tmp_path / "deep.toml")


def test_no_wave_section(file, capsys):
    file.write_text(MODEL.partition("[wave]")[0], encoding="utf-8")
    assert main(["derive", str(file)]) == 1
    assert "no section [wave]" in capsys.readouterr().err


def test_round_trip(tmp_path):
    model = plin.FluidModel('a "quoted" title \\ with all kinds', axes="xyz")
    model.constants("e m_e")
    n = model.scalar("n", background="n_0", latex="n")
    v, p = (
        model.vector("v", background=(0, "u", "2*w")),
        model.tensor("P", background=(("p", 0, 0), (0, "p", 0), (0, 0, 0))),
    )
    model.parameter("T", positive=True, value=0.1)
    model.vector_parameter("g", (0, 0, "-g_0"))
    model.law("n", plin.partial_t(n) + plin.div(n * v), 0.1 * n)
    model.law("v", "partial_t(v) + advect(v, v) = g - div(P)/(m_e*n) - T*grad(exp(-n/n_0))")
    model.law("P", plin.partial_t(p), plin.multiplier(p, -plin.k_abs) + plin.identity * n)
    path = tmp_path / "model.toml"
    model.save(path)
    again = plin.load(path)
    assert again.title == model.title
    assert {k: str(x) for k, x in again.laws.items()} == {k: str(x) for k, x in model.laws.items()}
    assert {k: str(f.background) for k, f in again.fields.items()} == {
        k: str(f.background) for k, f in model.fields.items()
    }
    assert again.values == model.values
    assert {n: s.is_positive for n, s in again.symbols.items()} == {
        n: s.is_positive for n, s in model.symbols.items()
    }
    again.save(tmp_path / "again.toml")
    assert path.read_text(encoding="utf-8") == (tmp_path / "again.toml").read_text(encoding="utf-8")


def test_units_of_energy(file):
    file.write_text(
        MODEL.replace("{ value = 1.0e5 }", '{ value = 2.0, unit = "eV" }'), encoding="utf-8"
    )
    model = plin.load(file)
    assert model.values["p_0"] == 2.0
    assert model.units["p_0"].scale == Fraction("1.602176634e-19")


def test_files_appear_whole_or_not_at_all(tmp_path, monkeypatch):
    from pathlib import Path

    def broken(self, target):
        raise OSError("no space")

    monkeypatch.setattr(Path, "replace", broken)
    with pytest.raises(OSError, match="no space"):
        write_whole(tmp_path / "x.txt", b"content")
    assert list(tmp_path.iterdir()) == []


SPEED = 'where = { c_s = "sqrt(7*p_0/(5*rho_0))" }'
SOUND = f"""
[[claim]]
text = "omega^2 = k^2 c_s^2"
{SPEED}
"""
EULER = f"""
[[claim]]
law = "momentum"
text = "rho_0 ∂_t v = -c_s^2 grad(rho)"
{SPEED}
"""


def test_check_agrees(file, tmp_path, capsys):
    file.write_text(MODEL + SOUND + EULER, encoding="utf-8")
    out = tmp_path / "notes"
    assert main(["check", str(file), "--out", str(out)]) == 0
    printed = capsys.readouterr().out
    assert "claim 1: omega^2 = k^2 c_s^2\nidentical: " in printed
    assert "claim 2: momentum: rho_0 ∂_t v" in printed
    assert "2 of 2 claims agree" in printed
    assert sorted(p.name for p in out.iterdir()) == ["claim-1.md", "claim-2.md"]
    note = (out / "claim-2.md").read_text(encoding="utf-8")
    assert r"\partial_t \tilde{\mathbf{v}}" in note
    assert "c_s = sqrt(7*p_0/(5*rho_0))" in note
    assert "# sound" in note
    assert r"\begin{itemize}" in note


def test_check_disagrees(file, tmp_path, capsys):
    wrong = SOUND.replace("k^2 c_s^2", "2 k^2 c_s^2")
    file.write_text(MODEL + EULER.replace("-c_s", "c_s") + SOUND + wrong, encoding="utf-8")
    assert main(["check", str(file)]) == 1
    printed = capsys.readouterr()
    assert "c_s² ∇ρ̃ should have the other sign" in printed.out
    assert "1 of 3 claims agree" in printed.out
    assert printed.err == ""
    assert [p.name for p in tmp_path.iterdir()] == ["sound.toml"]


def test_check_passes_on_what_the_file_states(file, monkeypatch, capsys):
    from plasmalin.check.verdict import Verdict
    from plasmalin.waves.matrix import WaveMatrix

    asked = []

    def check(self, claim, **options):
        asked.append((claim, options))
        return Verdict("identical", True, "", "")

    monkeypatch.setattr(WaveMatrix, "check", check)
    stated = 'under = ["k << 1"]\nphase = "exp(+i omega t)"\nunits = "gaussian"\n'
    file.write_text(MODEL + SOUND + stated + SOUND + "under = { p_0 = 3 }\n", encoding="utf-8")
    assert main(["check", str(file)]) == 0
    (claim, first), (_, second) = asked
    assert claim == "omega^2 = k^2 c_s^2"
    assert first["where"] == {"c_s": "sqrt(7*p_0/(5*rho_0))"}
    assert first["under"] == ("k << 1",)
    assert first["convention"] == plin.Convention("exp(+i omega t)", "gaussian")
    assert first["values"]["rho_0"] == 1.2
    assert second["under"] == {"p_0": 3}
    assert second["convention"] == plin.Convention()
    capsys.readouterr()


def test_laws_alone_need_no_wave(file, capsys):
    file.write_text(MODEL.partition("[wave]")[0] + EULER, encoding="utf-8")
    assert main(["check", str(file)]) == 0
    file.write_text(MODEL.partition("[wave]")[0] + SOUND, encoding="utf-8")
    assert main(["check", str(file)]) == 1
    assert "no section [wave]" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("[[claim]]", "[[law]]", "unknown entry|must be a text"),
        ("text = ", "txet = ", r"\[\[claim\]\]: unknown entry 'txet'; did you mean 'text'"),
        ('text = "omega^2 = k^2 c_s^2"', "text = 3", r"\[\[claim\]\] 1: 'text' must be a text"),
        ("omega^2 = ", "omega^2 == = ", r"\[\[claim\]\] 1: claim: "),
        (SPEED, "where = 3", r"\[\[claim\]\] 1 where: give"),
        (SPEED, "where = { c_s = true }", "c_s: True is not a finite number"),
        (SPEED, "", "'c_s' is not"),
        (SPEED, SPEED + "\nunder = 3", r"\[\[claim\]\] 1 under: give"),
        (SPEED, SPEED + '\nunits = "imperial"', "give one of SI, gaussian"),
        (SPEED, SPEED + '\nlaw = "heat"', "no law 'heat'; there are: continuity, momentum"),
        (SPEED, SPEED + '\nlaw = "momentum"\nunits = "SI"', "a claimed law takes 'where' only"),
    ],
)  # fmt: skip
def test_claim_at_fault(file, tmp_path, capsys, old, new, message):
    import re

    file.write_text(MODEL + SOUND.replace(old, new, 1), encoding="utf-8")
    out = tmp_path / "notes"
    assert main(["check", str(file), "--out", str(out)]) == 1
    printed = capsys.readouterr()
    assert re.search(message, printed.err), printed.err
    assert printed.out == ""
    assert not out.exists()


def test_no_claims(file, capsys):
    assert main(["check", str(file)]) == 1
    assert "no section [[claim]]" in capsys.readouterr().err


def test_claims_are_saved(file, tmp_path):
    from plasmalin.declare.writing import save_model

    stated = 'under = { p_0 = 3 }\nphase = "exp(-i omega t)"\n'
    more = SOUND + 'under = ["k*L << 1", "p_0 = 1"]\nunits = "gaussian"\n' + EULER
    file.write_text(MODEL + SOUND + stated + more, encoding="utf-8")
    read = read_model_file(file)
    again = tmp_path / "again.toml"
    save_model(read.model, again, read.claims)
    assert read_model_file(again).claims == read.claims
