"""Two records to what changed between them and why, in words; where the older record comes from.

The function of :mod:`compare` is called ``compare_records`` here, since the
package's ``compare`` is the module.
"""
from calcpack.revisions.baseline import baseline_for
from calcpack.revisions.compare import compare as compare_records
from calcpack.revisions.compare import differs
from calcpack.revisions.rendered import rendered
from calcpack.revisions.sources import folder_of, load

__all__ = ["baseline_for", "compare_records", "differs", "folder_of", "load", "rendered"]
