"""Published relations of fluids far apart: roots by the whole road, the audit, a model file that gives them back."""

from functools import cache

import numpy as np
import pytest
from published_roots import assert_published_roots
from published_user import CASES

import plasmalin as plin


@cache
def declared(name):
    """The case, and the model and assumptions that it was linearized from."""
    made = []
    linearize = plin.FluidModel.linearize

    def recorded(model, assume=()):
        made.append((model, assume))
        return linearize(model, assume)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(plin.FluidModel, "linearize", recorded)
        found = CASES[name]()
    return found, *made[-1]


def case(name):
    return declared(name)[0]


@pytest.mark.parametrize("name", CASES)
def test_published_roots(name):
    assert_published_roots(case(name))


@pytest.mark.parametrize("name", CASES)
def test_the_laws_audit(name):
    audit = case(name).wave.linear.audit(seed=2)
    assert audit.passed, str(audit)


@pytest.mark.parametrize("name", CASES)
def test_a_model_file_gives_the_model_back(name, tmp_path):
    c, model, assume = declared(name)
    model.save(tmp_path / "model.toml")
    loaded = plin.load(tmp_path / "model.toml")
    wave = loaded.linearize(assume).plane_wave(c.wave.k)
    assert (wave.roots(c.values, **c.k).omega == c.wave.roots(c.values, **c.k).omega).all()
    assert wave.relation.zero_modes == c.wave.relation.zero_modes
    assert loaded.values == model.values
    assert {n: u.text for n, u in loaded.units.items()} == {
        n: u.text for n, u in model.units.items()
    }


@pytest.mark.parametrize("name", CASES)
def test_advice_raises_no_alarm_without_number(name):
    """No remark on what has no length (a gradient beside a background that is zero) or is not finite."""
    c = case(name)
    assert all(np.isfinite(r.number) and r.number > 0 for r in c.wave.advice(c.values, **c.k))


def test_a_gradient_beside_a_zero_background_is_named():
    c = case("inertia_gravity_waves")
    advice = c.wave.advice(c.values, **c.k)
    assert not advice.about("field b")
    assert any("the gradient of b has no length" in text for text in advice.not_looked_at)
    assert "∇b = N² ẑ" in str(c.wave.linear.background)
