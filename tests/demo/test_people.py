import re

from server.demo.people import DEMO_PEOPLE, random_password


def test_there_is_one_person_for_each_role_that_writes():
    assert [person.role for person in DEMO_PEOPLE] == ["operator", "planner", "superintendent"]
    assert len({person.user_name for person in DEMO_PEOPLE}) == 3


def test_a_password_is_three_groups_without_words_or_look_alikes():
    assert re.fullmatch(
        r"([b-df-hjkmnp-rtv-z2-46-9]{4}-){2}[b-df-hjkmnp-rtv-z2-46-9]{4}", random_password()
    )


def test_no_password_comes_twice():
    assert len({random_password() for _ in range(200)}) == 200
