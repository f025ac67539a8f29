"""The verdict of a check, from counts alone."""

from dataclasses import dataclass, replace

from modalview.bounds.bands import BandCount, Cases, Counters, Edge, EdgeCount, count_band_by
from modalview.resonance.results import Band, Check, Verdict
from modalview.resonance.wording import band_text, modes_text

BY_COUNTS, EXACTLY = "by counts", "exactly"


@dataclass(frozen=True, slots=True)
class Exactness:
    """How many of the values that matter to the modes carry no tolerance.

    Parameters
    ----------
    exact, values : int
        Values taken as exact, of all values.
    """

    exact: int
    values: int

    @property
    def words(self) -> str:
        """What is added to "clear": nothing when every value has a tolerance."""
        if self.exact == 0:
            return ""
        if self.exact == self.values:
            return " (values taken as exact)"
        return f" ({self.exact} {'value' if self.exact == 1 else 'values'} taken as exact)"


@dataclass(frozen=True, slots=True, eq=False)
class Question:
    """A band to be judged: its edges as the counters take them, and what counts.

    Parameters
    ----------
    band : Band
        As shown.
    nominal, tolerance : pair of edges
    counters : Counters
    modes : int
        Of the whole model.
    proof : str
        What proves the answer: "by counts", "exactly".
    """

    band: Band
    nominal: tuple[Edge, Edge]
    tolerance: tuple[Edge, Edge]
    counters: Counters
    modes: int
    proof: str

    def counted(self) -> BandCount:
        """Count the three cases."""
        return count_band_by(self.counters, self.nominal, self.tolerance)

    def counted_at_nominal(self) -> BandCount:
        """Count the nominal case alone in the band as widened by the speed's tolerance."""
        alone = self.counters.nominal
        return count_band_by(Counters(alone, alone, alone), self.tolerance, self.tolerance)


def judge(band: Band, cases: Cases, exactness: Exactness) -> Check:
    """Return the verdict of one check, from counts in floating point alone.

    Parameters
    ----------
    band : Band
    cases : Cases
        The model at nominal, soft-heavy and stiff-light values, ready to be counted.
    exactness : Exactness
        For the wording of "clear".
    """
    counters, modes = cases.counters(), cases.nominal.modes
    return answer(Question(band, band.nominal, band.tolerance, counters, modes, BY_COUNTS), exactness)


def answer(question: Question, exactness: Exactness) -> Check:
    """Return the verdict on a band.

    Notes
    -----
    Clear: no mode in the band at any value within tolerance. Clear at nominal only: some combination
    reaches it, or rounding leaves that undecided. Mode in band: one lies in it now, or rounding leaves
    that undecided. R. Courant and D. Hilbert, Methods of Mathematical Physics I, chapter 1: ordered
    natural frequencies only rise with any stiffness and only fall with any mass (from memory).
    """
    count = question.counted()
    if count.inside is None or count.inside > 0:
        return _in_band(question, count)
    if count.possible is None or count.possible > 0:
        return _nominal_only(question, count)
    return _clear(question, count, exactness)


def _clear(question: Question, count: BandCount, exactness: Exactness) -> Check:
    # No mode is possible inside, so that as many lie below the band at every value within tolerance.
    above_all = count.below == question.modes
    wording = ("clear in this model" if above_all else "clear") + exactness.words
    text, proven = band_text(question.band), f"proven {question.proof}"
    if above_all:
        reason = f"{text} lies above every mode of this model; local modes are not modelled"
        reason += _exactly(question)
    elif exactness.exact == exactness.values:
        reason = f"no mode within {text}; {proven} at the values as given"
    else:
        reason = f"no mode within {text} at any value within tolerance; {proven}"
    return _check(question, count, Verdict.CLEAR, wording, reason)


def _in_band(question: Question, count: BandCount) -> Check:
    text = band_text(question.band)
    if count.inside is None:
        reason = f"rounding leaves undecided whether a mode lies within {text}; taken as one"
    else:
        always = ", at any value within tolerance" if count.certain else ""
        reason = f"{modes_text(count.inside)} within {text}{always}{_exactly(question)}"
    return _check(question, count, Verdict.IN_BAND, Verdict.IN_BAND.value, reason)


def _exactly(question: Question) -> str:
    return "; proven exactly" if question.proof == EXACTLY else ""


def _nominal_only(question: Question, count: BandCount) -> Check:
    deciding, text = None, band_text(question.band)
    more: tuple[EdgeCount, ...] = ()
    if count.possible is None:
        reason = f"rounding leaves undecided whether some values within tolerance reach {text}"
    else:
        deciding, reach, more = _deciding_case(question, count)
        reason = f"no mode lies in the band at nominal values, but {reach} {text}{_exactly(question)}"
    found = _check(question, count, Verdict.NOMINAL_ONLY, Verdict.NOMINAL_ONLY.value, reason, deciding)
    return replace(found, evidence=_once(found.evidence + more))


def _once(evidence: tuple[EdgeCount, ...]) -> tuple[EdgeCount, ...]:
    """Return every count once, in the order made; the same edge may be asked for again."""
    return tuple({(one.case, one.side, one.edge): one for one in reversed(evidence)}.values())[::-1]


def _deciding_case(question: Question, count: BandCount) -> tuple[str | None, str, tuple[EdgeCount, ...]]:
    """Return which case brings a mode into a band empty at nominal values, what does so in words, and counts.

    Soft-heavy brings modes down past the upper edge, stiff-light up past the lower one; the one that
    moves more where both do. None where the tolerance of the speed does so and no values do.
    """
    if question.tolerance == question.nominal:
        return *_case_of(count, count), ()
    values = count_band_by(question.counters, question.nominal, question.nominal)
    speed = question.counted_at_nominal()
    counts = values.evidence + speed.evidence
    if values.possible:
        case, reach = _case_of(values, values)
        also = " (and so does the tolerance of the speed alone)" if speed.inside else ""
        return case, f"{reach}{also}", counts
    if speed.inside:
        return None, "the tolerance of the speed alone reaches", counts
    case, _ = _case_of(count, speed)
    return case, f"the {case} case together with the tolerance of the speed reaches", counts


def _case_of(count: BandCount, nominal: BandCount) -> tuple[str, str]:
    fallen = _number(count, "soft-heavy", "at most") - _number(nominal, "nominal", "at most")
    risen = _number(nominal, "nominal", "below") - _number(count, "stiff-light", "below")
    case = "soft-heavy" if fallen >= risen else "stiff-light"
    both = min(fallen, risen) > 0
    return case, "the soft-heavy and the stiff-light case both reach" if both else f"the {case} case reaches"


def _number(count: BandCount, case: str, side: str) -> int:
    """Return one of the counts a band rests on; they are decided where this is asked."""
    return next(e.count.number or 0 for e in count.evidence if e.case == case and e.side == side)


def _check(
    question: Question,
    count: BandCount,
    verdict: Verdict,
    wording: str,
    reason: str,
    deciding: str | None = None,
) -> Check:
    return Check(
        band=question.band,
        verdict=verdict,
        wording=wording,
        reason=reason,
        inside=count.inside,
        possible=count.possible,
        certain=count.certain,
        below=count.below,
        upto=count.upto,
        deciding_case=deciding,
        undecided=count.undecided,
        proof=question.proof,
        evidence=count.evidence,
    )


def worst(checks: tuple[Check, ...]) -> Verdict | None:
    """Return the worst verdict; None when there is nothing to check."""
    order = list(Verdict)
    return max((check.verdict for check in checks), key=order.index, default=None)
