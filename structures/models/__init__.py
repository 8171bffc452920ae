from structures.models.people import User
