"""What is wrong with one cell."""


class CellProblem(ValueError):
    """A cell that cannot be used.

    Parameters
    ----------
    sentence
        What is wrong and what to do, to stand after "Row 7: ".
    suggestion
        The text that would put it right, where there is one.
    """

    def __init__(self, sentence: str, suggestion: str | None = None) -> None:
        super().__init__(sentence)
        self.sentence = sentence
        self.suggestion = suggestion
