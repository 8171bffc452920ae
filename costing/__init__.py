"""Money and seasons: what a structure costs and when it can be built.

price -> risk, plan -> appraisal -> documents; above them records and faces as in `structures`.
Read `appraisal` first: it walks a survey pack through every room, top to bottom.
"""
