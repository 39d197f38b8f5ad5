from server.science.electrolyte.laliberte_fits import SALT_FITS


def test_a_fit_is_found_by_its_formula():
    assert all(fit.formula == formula for formula, fit in SALT_FITS.items())


def test_the_salts_of_tankhouses_are_there():
    winning = {"CuSO4", "ZnSO4", "NiSO4", "CoSO4", "MnSO4", "CdSO4", "H2SO4"}
    company = {"FeSO4", "Fe2(SO4)3", "MgSO4", "Na2SO4", "K2SO4", "(NH4)2SO4"}

    assert set(SALT_FITS) == winning | company


def test_ranges_are_named_by_salt_and_quantity():
    warm, rich = SALT_FITS["CuSO4"].density_ranges

    assert str(warm) == "CuSO4 temperature_k 283.15 to 333.15"
    assert str(rich) == "CuSO4 dissolved_share 0 to 0.2844"
