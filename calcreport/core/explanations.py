"""What each problem means and how to mend it, by slug. Read by `calcreport explain`."""

from __future__ import annotations

from calcreport.core.explained_files import FILES
from calcreport.core.explained_issues import ISSUES
from calcreport.core.explained_projects import PROJECTS
from calcreport.core.explained_reviews import REVIEWS
from calcreport.core.explained_schedules import SCHEDULES
from calcreport.core.explained_templates import TEMPLATES

#: the first line says what the problem means; an example stands last
EXPLANATIONS: dict[str, str] = {**FILES, **ISSUES, **PROJECTS, **REVIEWS, **SCHEDULES, **TEMPLATES}
