"""What may be written in a shot file: one file a family of keys, each key with its meaning, unit, range and example.

Every table is a pydantic model whose fields carry a `Leaf` (a number, a vector, a choice...). Validation, the JSON
Schema and the reference page are all made from these models; nothing about a key is written anywhere else.
"""
