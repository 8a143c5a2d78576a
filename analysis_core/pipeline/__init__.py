"""The whole road: a file in, lines idealised, solved, combined, verified and posted.

This is the one package that knows all the parts; the command line and the add-on call it and
nothing else.
"""

from analysis_core.pipeline.choosing import lightest, lightest_of, offered
from analysis_core.pipeline.documents import (
    document,
    is_check_code,
    issues,
    job_text,
    reactions_csv,
    rules_document,
    rules_text,
    sheet,
    survey_document,
)
from analysis_core.pipeline.reading import Reading, Survey, idealised, read, stock, survey
from analysis_core.pipeline.solving import (
    checks,
    of_lines,
    of_storeys,
    posted_states,
    reconcile,
    records,
    run,
    solve,
)
from analysis_core.pipeline.writing import (
    MemberUpdate,
    member_changes,
    post,
    remove,
    update_members,
)

__all__ = [
    "MemberUpdate",
    "Reading",
    "Survey",
    "checks",
    "document",
    "idealised",
    "is_check_code",
    "issues",
    "job_text",
    "lightest",
    "lightest_of",
    "member_changes",
    "of_lines",
    "of_storeys",
    "offered",
    "post",
    "posted_states",
    "reactions_csv",
    "read",
    "reconcile",
    "records",
    "remove",
    "rules_document",
    "rules_text",
    "run",
    "sheet",
    "solve",
    "stock",
    "survey",
    "survey_document",
    "update_members",
]
