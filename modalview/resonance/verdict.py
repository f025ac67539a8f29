"""The verdict of a check, from counts alone."""

from dataclasses import dataclass

from modalview.bounds.bands import BandCount
from modalview.resonance.results import Band, Check, Verdict
from modalview.resonance.wording import band_text, modes_text


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


def judge(band: Band, count: BandCount, exactness: Exactness) -> Check:
    """Return the verdict of one check.

    Parameters
    ----------
    band : Band
    count : BandCount
        Modes in the band now, at some values and at every value within tolerance.
    exactness : Exactness
        For the wording of "clear".

    Notes
    -----
    Clear: no mode in the band at any value within tolerance. Clear at nominal only: some combination
    reaches it, or rounding leaves that undecided. Mode in band: one lies in it now, or rounding leaves
    that undecided. R. Courant and D. Hilbert, Methods of Mathematical Physics I, chapter 1: ordered
    natural frequencies only rise with any stiffness and only fall with any mass (from memory).
    """
    if count.inside is None or count.inside > 0:
        return _in_band(band, count)
    if count.possible is None or count.possible > 0:
        return _nominal_only(band, count)
    above_all = count.below_everywhere
    wording = ("clear in this model" if above_all else "clear") + exactness.words
    if above_all:
        reason = f"{band_text(band)} lies above every mode of this model; local modes are not modelled"
    elif exactness.exact == exactness.values:
        reason = f"no mode within {band_text(band)}; proven by counts at the values as given"
    else:
        reason = f"no mode within {band_text(band)} at any value within tolerance; proven by counts"
    return _check(band, count, Verdict.CLEAR, wording, reason)


def _in_band(band: Band, count: BandCount) -> Check:
    undecided: tuple[str, ...] = ()
    if count.inside is None:
        reason = f"rounding leaves undecided whether a mode lies within {band_text(band)}; taken as one"
        undecided = ("nominal",)
    else:
        always = ", at any value within tolerance" if count.certain else ""
        reason = f"{modes_text(count.inside)} within {band_text(band)}{always}"
    return _check(band, count, Verdict.IN_BAND, Verdict.IN_BAND.value, reason, undecided)


def _nominal_only(band: Band, count: BandCount) -> Check:
    undecided: tuple[str, ...] = ()
    if count.possible is None:
        undecided = count.undecided
        reason = f"rounding leaves the {' and the '.join(undecided)} count of {band_text(band)} undecided"
    elif count.deciding_case is None:
        reason = f"only the tolerance of the speed reaches a mode: {band_text(band)} is widened by it"
    else:
        reach = f"the {count.deciding_case} case reaches {band_text(band)}"
        reason = f"no mode lies in the band at nominal values, but {reach}"
    return _check(band, count, Verdict.NOMINAL_ONLY, Verdict.NOMINAL_ONLY.value, reason, undecided)


def _check(
    band: Band, count: BandCount, verdict: Verdict, wording: str, reason: str, undecided: tuple[str, ...] = ()
) -> Check:
    return Check(
        band=band,
        verdict=verdict,
        wording=wording,
        reason=reason,
        inside=count.inside,
        possible=count.possible,
        certain=count.certain,
        deciding_case=count.deciding_case if verdict is Verdict.NOMINAL_ONLY else None,
        undecided=undecided,
    )


def worst(checks: tuple[Check, ...]) -> Verdict | None:
    """Return the worst verdict; None when there is nothing to check."""
    order = list(Verdict)
    return max((check.verdict for check in checks), key=order.index, default=None)
