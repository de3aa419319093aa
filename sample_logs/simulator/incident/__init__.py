"""Small invented incidents by the thousand: a run goes on as it should until something, or nothing, happens.

Every incident holds one known cause (some hold two). Two sets of physics differ in numbers and in
structure, so that what is learned on one can be judged on the other.
"""
