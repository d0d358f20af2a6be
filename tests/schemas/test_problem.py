"""The one shape of faults."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from schemas.problem import Fault, FaultSchema, beyond, fault_document, faults_of, pointer_token


def test_a_tree_of_messages_becomes_a_list_in_a_fixed_order() -> None:
    tree = {"b": {1: ["second"], 0: ["first"]}, "a": {"x": ["one", "two"]}}
    faults = [Fault("one", "/a/x"), Fault("two", "/a/x"), Fault("first", "/b/0"), Fault("second", "/b/1")]
    assert list(faults_of(tree)) == faults


def test_indices_are_ordered_as_numbers() -> None:
    tree = {"a": {10: ["ten"], 9: ["nine"]}}
    assert [fault.pointer for fault in faults_of(tree)] == ["/a/9", "/a/10"]


def test_a_limit_is_told_with_what_it_allows_and_what_was_received() -> None:
    (fault,) = faults_of({"gain": beyond("digits", 120, 121, "digits of one number").messages})
    assert fault_document(fault) == {
        "pointer": "/gain",
        "detail": "Over the limit 'digits': digits of one number, allowed 120, received 121.",
        "limit": "digits",
        "allowed": 120,
        "received": 121,
    }


def test_without_a_limit_none_is_told() -> None:
    assert fault_document(Fault("wrong", "/a")) == {"pointer": "/a", "detail": "wrong"}


@given(st.text())
def test_a_token_is_its_key_escaped(key: str) -> None:
    token = pointer_token(key)
    assert "/" not in token
    assert token.replace("~1", "/").replace("~0", "~") == key


@pytest.mark.parametrize(
    "fault", [Fault("wrong", "/a"), Fault("much", "/b", "digits", 1, "a text")], ids=repr
)
def test_a_fault_document_is_as_its_schema_says(fault: Fault) -> None:
    assert FaultSchema().validate(fault_document(fault)) == {}
