"""Metres: a structure from survey to verdict. The rooms stand in the order of the data.

intake -> ground -> wall -> takeoff, water -> drawing, documents; life says who decides on which
paper. Above them stand the records: models, access, queries and runs, actions; then the faces:
web, api, tasks, management. `.importlinter` holds this order.
"""
