"""What a probe answers."""

from marshmallow import Schema, fields


class ProbeSchema(Schema):
    """The state of the process."""

    status = fields.String(required=True, metadata={"description": "alive or ready."})
