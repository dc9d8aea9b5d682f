import json

import pytest

from advisor.counsel.schemas import MODELS, SchemaName, schema_path, schema_text


@pytest.mark.parametrize("name", MODELS)
def test_the_published_schema_is_the_one_the_model_makes(name: SchemaName) -> None:
    assert schema_path(name).read_text(encoding="utf-8") == schema_text(name)


def test_only_the_two_spheres_of_a_visit_are_required() -> None:
    schema = json.loads(schema_text("visit"))
    assert schema["required"] == ["prescription"]
    assert schema["$defs"]["Prescription"]["required"] == ["right", "left"]
    assert schema["$defs"]["EyePrescription"]["required"] == ["sphere"]
    assert "for" in schema["$defs"]["Prescription"]["properties"]


@pytest.mark.parametrize("name", MODELS)
def test_unknown_names_are_refused_by_the_schemas_too(name: SchemaName) -> None:
    schema = json.loads(schema_text(name))
    objects = [part for part in (schema, *schema["$defs"].values()) if part.get("type") == "object"]
    assert len(objects) > 5
    assert all(part["additionalProperties"] is False for part in objects)
