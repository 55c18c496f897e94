"""From a job's document to its keys: every key that is wrong is told, and the rest still checked.

A key that can't be read is told and gets a stand-in, so that what the other keys say together
is checked in the same run. `JobText.unread` knows the stand-ins, and keeps what follows from them
from being told.
"""

from __future__ import annotations

from copy import deepcopy
from typing import TYPE_CHECKING, Any, Literal, get_args, get_origin

from pydantic import ValidationError

from matchup.errors import did_you_mean
from matchup.inputs.job_text import JobText
from matchup.inputs.schema import UNREAD, JobKeys, Keys, OfQuantity
from matchup.inputs.toml_lines import Path as KeyPath
from matchup.units import example_of

if TYPE_CHECKING:
    from pydantic.fields import FieldInfo
    from pydantic_core import ErrorDetails

LATER = {
    "repeat_blows": "Repeated blows can't be computed yet; leave the key out.",
}
"""Keys of jobs that this version can't do, with what to do instead."""
HOLDERS: tuple[KeyPath, ...] = (("stages",), ("pile", "parts"), ("pile",))
"""Tables of whose contents one key alone is replaced: lists of them, and what is in a table."""
WORDS = {
    "string_type": "must be a text",
    "int_type": "must be a whole number",
    "int_from_float": "must be a whole number",
    "float_type": "must be a number",
    "bool_type": "must be true or false",
    "list_type": "must be a list",
    "model_type": "must be a table of keys",
    "model_attributes_type": "must be a table of keys",
}


def read_keys(text: JobText) -> JobKeys:
    """Return the keys of a job, with stand-ins for those that are told to be wrong."""
    try:
        return JobKeys.model_validate(text.data)
    except ValidationError as error:
        details = error.errors(include_url=False)
    paths = [_path_in_file(text.data, detail["loc"]) for detail in details]
    data = deepcopy(text.data)
    misspelt: set[KeyPath] = set()
    for path, detail in zip(paths, details, strict=True):
        if detail["type"] == "extra_forbidden":
            misspelt |= _tell_unknown(text, path)
            del _holder(data, path)[path[-1]]
    # Nothing follows from a key that is misspelt: it is told once.
    text.unread |= {key for key in misspelt if key[-1] not in _holder(data, key)}
    for path, detail in zip(paths, details, strict=True):
        if detail["type"] != "extra_forbidden":
            if path not in misspelt:
                _tell(text, path, detail)
            _stand_in(data, text.unread, path)
    return JobKeys.model_validate(data)


def _tell_unknown(text: JobText, path: KeyPath) -> set[KeyPath]:
    """Tell an unknown key; return the key that it is meant for, where one is near."""
    key, known = str(path[-1]), _known_keys(path[:-1])
    hint = did_you_mean(key, known)
    do = LATER.get(key) or hint or f"Known: {', '.join(known)}."
    text.tell(path, "must be a known key", do, found=f"`{key}`")
    return {(*path[:-1], hint.split("`")[1])} if hint else set()


def _tell(text: JobText, path: KeyPath, detail: ErrorDetails) -> None:
    kind, context = detail["type"], detail.get("ctx", {})
    if kind == "missing":
        text.tell(path, "must be given", how_to_write(path), found="")
    elif kind == "value_error":
        cause = context["error"]
        text.tell(path, getattr(cause, "must", str(cause)), getattr(cause, "do", ""))
    elif kind == "literal_error":
        options = [str(option) for option in get_args(_literal(_field(path).annotation))]
        do = did_you_mean(text.typed(path).strip("\"'"), options)
        text.tell(path, f"must be one of: {', '.join(options)}", do)
    elif kind == "form":
        text.tell(path, str(detail["msg"]))
    else:
        must = WORDS.get(kind, f"must be otherwise ({detail['msg']})")
        text.tell(path, must, _brackets(kind, path), found=text.typed(path) or "another table")


def _brackets(kind: str, path: KeyPath) -> str:
    """Return the remedy where a table has single brackets in place of double ones, or reversely."""
    if path == ("stages",) and kind == "list_type":
        return "Write [[stages]] with double brackets, once for each stage."
    if kind.startswith("model") and len(path) == 1:
        return f"Write [{path[0]}] with single brackets, and its keys below."
    return ""


def how_to_write(path: KeyPath) -> str:
    """Return a hint at how a key that is missing may be given."""
    field, key = _field(path), path[-1]
    if quantity := _quantity(field):
        return f"For example `{key} = {example_of(quantity)}`."
    if literal := _literal(field.annotation):
        return f"One of: {', '.join(map(str, get_args(literal)))}."
    if path == ("stages",):
        return "Write [[stages]], and its keys below."
    return (
        f"Write [{key}], and its keys below." if _model(field.annotation) and len(path) == 1 else ""
    )


def _path_in_file(data: Any, where: tuple[int | str, ...]) -> KeyPath:
    """Return the path in the file: pydantic adds which form of a value it tried."""
    path: list[str | int] = []
    value = data
    for depth, part in enumerate(where):
        in_table = isinstance(value, dict) and (part in value or depth == len(where) - 1)
        in_list = isinstance(value, list) and isinstance(part, int)
        if in_table or in_list:
            path.append(part)
            value = value[part] if in_list or part in value else None
    return tuple(path)


def _holder(data: Any, path: KeyPath) -> Any:
    for part in path[:-1]:
        data = data[part]
    return data


def _stand_in(data: dict[str, Any], unread: set[KeyPath], path: KeyPath) -> None:
    """Replace what holds a wrong value: a whole key, or one of a stage or a part."""
    unread.add(path)
    holders = [prefix for prefix in HOLDERS if path[: len(prefix)] == prefix]
    depth = max(map(len, holders), default=0) + 2 if holders else 2
    if path[0] == "doubt" and len(path) > 2 and isinstance(path[2], int):
        depth = 3
    key = path[: min(len(path), depth)]
    unread.add(key)
    holder = _holder(data, key)
    if isinstance(key[-1], int):
        holder[key[-1]] = _required(_model(_field(key[:-1]).annotation))
        return
    field = _field(key)
    if field.is_required() or _quantity(field):
        holder[key[-1]] = _example(field)
    else:
        holder.pop(key[-1], None)


def _required(model: type[Keys] | None) -> dict[str, Any]:
    """Return a table with stand-ins for the keys that it must have."""
    assert model is not None
    fields = model.model_fields
    return {key: _example(field) for key, field in fields.items() if field.is_required()}


def _example(field: FieldInfo) -> Any:
    if _quantity(field):
        return UNREAD
    if literal := _literal(field.annotation):
        return get_args(literal)[0]
    if get_origin(field.annotation) is list:
        return []
    if field.annotation is int:
        return 1
    model = _model(field.annotation)
    return _required(model) if model else ""


def _known_keys(path: KeyPath) -> list[str]:
    """Return the keys that a table of the job file may have."""
    model = _model(_field(path).annotation) if path else JobKeys
    assert model is not None
    return [field.alias or name for name, field in model.model_fields.items()]


def _field(path: KeyPath) -> FieldInfo:
    """Return the field that a key belongs to; places in lists are passed over."""
    model: type[Keys] | None = JobKeys
    field = None
    for part in path:
        # Keys of a table that the user names, like those of ground cases, have no fields.
        if isinstance(part, str) and model is not None:
            fields = model.model_fields
            field = next(f for name, f in fields.items() if part in (name, f.alias))
            model = _model(field.annotation)
    assert field is not None
    return field


def _model(annotation: Any) -> type[Keys] | None:
    """Return the table that an annotation names, if any."""
    if isinstance(annotation, type) and get_origin(annotation) is None:
        return annotation if issubclass(annotation, Keys) else None
    return next(filter(None, map(_model, get_args(annotation))), None)


def _literal(annotation: Any) -> Any:
    """Return the choice of texts that an annotation names, if any."""
    if get_origin(annotation) is Literal:
        return annotation
    return next(filter(None, map(_literal, get_args(annotation))), None)


def _quantity(annotation: Any) -> str:
    """Return the quantity of a field or an annotation, if it has one."""
    marks: Any = getattr(annotation, "metadata", None) or getattr(annotation, "__metadata__", ())
    for mark in marks:
        if isinstance(mark, OfQuantity):
            return mark.quantity
    inner: Any = getattr(annotation, "annotation", annotation)
    for part in get_args(inner):
        if quantity := _quantity(part):
            return quantity
    return ""
