"""A folder that answers what is dropped into it. It knows nothing of quality: it is handed a function.

    in/          drop here; subfolders are kept in the paths of the results
    working/     files being answered, a folder each
    answered/    NAME.answered.xlsx and NAME.answered.json
    originals/   the dropped files that were answered, untouched
    returned/    files that could not be answered, each with NAME.returned.json saying why
    .sheetqc/    what the service keeps for itself: log, journal, errors

Nothing is lost and nothing is done twice, at whatever moment a service is killed, because a file's state is the place
it is in, and every step is one rename or one file written whole:

    1  in/NAME -> working/CLAIM/file/NAME   one rename: only one service can do it. CLAIM carries the service's name.
    2  answered into working/CLAIM/answer-N nobody sees it; killed here, the file is answered again from the start,
                                            into a fresh answer-N+1, so that a leftover process disturbs nothing
    3  working/CLAIM/done.json              the decision, with every move it asks for; written whole or not at all
    4  answer-N/* -> answered/ (returned/)  renames, workbook first; killed here, whoever takes the claim over
    5  file/NAME -> originals/ (returned/)  carries out the moves whose source is still there
    6  the journal notes the answer         once more is no harm
    7  the claim is removed                 done.json last

The claims of a service that is gone are taken over by renaming their folders (only one can), on start and every few
seconds; see `owners` for how it is known to be gone, `publish` for 3 to 5, `desk` for failures on the way.
"""

from __future__ import annotations

from sheetqc.folder.answering import Answerer
from sheetqc.folder.serving import ServeResult, serve
from sheetqc.folder.status import FolderStatus, status

__all__ = ["Answerer", "FolderStatus", "ServeResult", "serve", "status"]
