"""Exports of a saved result."""

import csv
import io


def profile_csv(result):
    """
    Return the profile as CSV (RFC 4180), one station a row, the unit in each header.

    Parameters
    ----------
    result : Result
        A rated case.

    Returns
    -------
    text : str
        Lines end in CR LF, as the standard asks.
    """
    out = io.StringIO(newline="")
    writer = csv.writer(out)
    writer.writerow(result.profile)
    writer.writerows(zip(*result.profile.values(), strict=True))
    return out.getvalue()
