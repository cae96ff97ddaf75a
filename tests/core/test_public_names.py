"""Every public name is there, and nothing else shows."""

import surfdisp


def test_every_public_name_is_found_and_dir_shows_only_those():
    assert set(dir(surfdisp)) == set(surfdisp.__all__)
    for name in surfdisp.__all__:
        assert getattr(surfdisp, name) is not None


def test_a_library_user_can_walk_from_record_to_site_by_the_top_level_names():
    road = (
        "read_gather prepare_records condition dispersion_image pick combine_picks curve_from_gathers "
        "invert site_result vs30 average_velocity"
    )
    assert set(road.split()) <= set(surfdisp.__all__)
