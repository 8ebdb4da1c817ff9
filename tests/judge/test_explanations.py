"""Why a line differs."""

from bitweight.judge.explanations import Explanation


def test_an_empty_explanation_blames_nothing() -> None:
    """Without anything found there is neither a wrong constant nor a residual."""
    nothing = Explanation()
    assert (nothing.wrong, nothing.cancelling, nothing.residual) == ((), (), None)
