"""Which sites this season, and when: an integer programme with a proven bound.

In the order of the data: season, reading; stock, greedy; deletion, clash; programme, solver;
reasons, rounds; gangs. `rounds.plan_season` is the way in.
"""
