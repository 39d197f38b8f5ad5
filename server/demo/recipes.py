"""The sections of the made-up tankhouses: numbers a metallurgist would find ordinary."""

from dataclasses import replace

from server.demo.recipe import (
    BathHabits,
    CropHabits,
    CurrentHabits,
    PenHabits,
    Planned,
    PlannedBypass,
    PlannedContact,
    PlannedCut,
    PlannedGap,
    PlannedOutage,
    PlannedScaleFault,
    PlannedShort,
    SectionRecipe,
    VoltageHabits,
)
from server.science.constants import COPPER, ZINC

COPPER_WON = SectionRecipe(
    name="EW1",
    process="copper electrowinning",
    metal=COPPER,
    cells=60,
    rows=2,
    cathodes_per_cell=60,
    cathode_area_m2=2.0,
    rated_amps=36_000.0,
    metal_value_per_kg=9.2,
    target_efficiency=0.92,
    target_kwh_t=1850.0,
    target_volts=(1.95, 2.11),
    current=CurrentHabits(load=0.995, tariff_cut_share=0.08),
    voltage=VoltageHabits(
        cell_volts=2.03,
        resistive_share=0.2,
        level_spread_v=0.014,
        seat_spread_v=0.003,
        common_spread_v=0.006,
        common_hours=36.0,
        growth_volts=-0.010,
        fresh_volts=0.006,
        fresh_hours=5.0,
    ),
    crop=CropHabits(
        crop_days=6,
        cells_per_lot=5,
        efficiency=0.926,
        efficiency_spread=0.005,
        efficiency_wander=0.003,
        shorts_per_crop=0.26,
        short_share=0.08,
    ),
    pen=PenHabits(round_minutes=20, meter_noise_v=0.002, slips_per_month=1.0),
    bath=BathHabits(
        metal_g_l=44.0,
        acid_g_l=178.0,
        temperature_degc=45.0,
        metal_drop_g_l=4.2,
        extras=(("iron_g_l", 1.6), ("chloride_mg_l", 24.0), ("cobalt_mg_l", 160.0)),
    ),
    optional_facts=(
        ("differential_resistance_uohm", 11.3),
        ("electrode_gap_mm", 38.0),
        ("rectifier_efficiency_pct", 96.5),
        ("meter_accuracy_mv", 2.0),
        ("current_accuracy_pct", 0.5),
        ("scale_accuracy_pct", 0.2),
    ),
)

COPPER_REFINED = SectionRecipe(
    name="ER1",
    process="copper electrorefining",
    metal=COPPER,
    cells=40,
    rows=2,
    cathodes_per_cell=46,
    cathode_area_m2=2.0,
    rated_amps=27_000.0,
    metal_value_per_kg=9.2,
    target_efficiency=0.965,
    target_kwh_t=250.0,
    target_volts=(0.25, 0.33),
    current=CurrentHabits(load=1.0, tariff_cut_share=0.05),
    voltage=VoltageHabits(
        cell_volts=0.290,
        resistive_share=0.9,
        level_spread_v=0.006,
        seat_spread_v=0.0015,
        common_spread_v=0.003,
        common_hours=48.0,
        growth_volts=-0.008,
        fresh_volts=0.004,
        fresh_hours=8.0,
    ),
    crop=CropHabits(
        crop_days=10,
        cells_per_lot=1,
        efficiency=0.972,
        efficiency_spread=0.004,
        efficiency_wander=0.002,
        shorts_per_crop=0.5,
        short_share=0.07,
        starter_kg_per_cathode=5.6,
    ),
    pen=PenHabits(
        round_minutes=25, meter_noise_v=0.0012, reader_spread_v=0.0006, slips_per_month=1.0
    ),
    bath=BathHabits(
        metal_g_l=46.0,
        acid_g_l=172.0,
        temperature_degc=62.0,
        metal_drop_g_l=0.0,
        extras=(
            ("nickel_g_l", 12.5),
            ("arsenic_g_l", 6.8),
            ("antimony_mg_l", 310.0),
            ("bismuth_mg_l", 140.0),
            ("chloride_mg_l", 52.0),
        ),
    ),
    optional_facts=(("rectifier_efficiency_pct", 95.0),),
)

ZINC_WON = SectionRecipe(
    name="ZN1",
    process="zinc electrowinning",
    metal=ZINC,
    cells=44,
    rows=2,
    cathodes_per_cell=48,
    cathode_area_m2=2.4,
    rated_amps=55_000.0,
    metal_value_per_kg=2.8,
    target_efficiency=0.90,
    target_kwh_t=3000.0,
    target_volts=(3.18, 3.50),
    current=CurrentHabits(load=0.98, tariff_cut_share=0.08),
    voltage=VoltageHabits(
        cell_volts=3.35,
        resistive_share=0.25,
        level_spread_v=0.025,
        seat_spread_v=0.005,
        common_spread_v=0.010,
        common_hours=30.0,
        growth_volts=-0.015,
        fresh_volts=0.010,
        fresh_hours=3.0,
    ),
    crop=CropHabits(
        crop_days=2,
        cells_per_lot=11,
        efficiency=0.904,
        efficiency_spread=0.006,
        efficiency_wander=0.004,
        shorts_per_crop=0.09,
        short_share=0.06,
    ),
    pen=PenHabits(
        round_minutes=45,
        meter_noise_v=0.004,
        reader_spread_v=0.002,
        decimals=2,
        slips_per_month=1.0,
    ),
    bath=BathHabits(
        metal_g_l=60.0,
        acid_g_l=168.0,
        temperature_degc=37.0,
        metal_drop_g_l=6.0,
        extras=(("manganese_g_l", 4.2), ("chloride_mg_l", 180.0)),
    ),
    optional_facts=(("rectifier_efficiency_pct", 97.0), ("meter_accuracy_mv", 5.0)),
)

DEMO_RECIPES = (
    replace(
        COPPER_WON,
        current=replace(COPPER_WON.current, has_counter=True),
        planned=Planned(
            shorts=(
                PlannedShort(oldest=1, hours_before_end=58.0, growth_h=24.0, share=0.24),
                PlannedShort(oldest=4, hours_before_end=26.0, growth_h=10.0, share=0.12),
                PlannedShort(oldest=9, hours_before_end=17.0, growth_h=0.0, share=0.07),
            ),
            contacts=(
                PlannedContact(cell=23, days_before_end=62.0, micro_ohm_per_day=0.056),
                PlannedContact(
                    cell=41,
                    days_before_end=104.0,
                    micro_ohm_per_day=0.040,
                    cleaned_days_before_end=66.3,
                ),
            ),
            bypasses=(PlannedBypass(cell=17, days_before_end=1.4, hours=None),),
            outages=(PlannedOutage(84.3, 9.0), PlannedOutage(26.6, 5.0)),
        ),
    ),
    replace(
        COPPER_WON,
        name="EW2",
        cells=56,
        cathodes_per_cell=54,
        rated_amps=32_400.0,
        target_efficiency=0.92,
        target_kwh_t=1800.0,
        target_volts=(1.91, 2.07),
        current=CurrentHabits(load=1.0, tariff_cut_share=0.10),
        voltage=replace(COPPER_WON.voltage, cell_volts=1.99),
        crop=replace(
            COPPER_WON.crop, crop_days=7, cells_per_lot=4, efficiency=0.921, shorts_per_crop=0.30
        ),
        pen=PenHabits(round_minutes=45, meter_noise_v=0.003, decimals=2, slips_per_month=1.0),
        planned=Planned(
            shorts=(PlannedShort(oldest=2, hours_before_end=40.0, growth_h=18.0, share=0.28),),
            bypasses=(PlannedBypass(cell=38, days_before_end=33.0, hours=52.0),),
            outages=(PlannedOutage(71.2, 7.0),),
            cuts=(PlannedCut(days_before_end=21.0, days=8.0, share=0.18),),
            gaps=(PlannedGap(days_before_end=12.4, hours=7.0),),
            scale_faults=(PlannedScaleFault(days_before_end=45.0, share=0.005),),
        ),
        optional_facts=(("rectifier_efficiency_pct", 96.0), ("meter_accuracy_mv", 5.0)),
    ),
    replace(
        COPPER_REFINED,
        planned=Planned(
            shorts=(
                PlannedShort(oldest=1, hours_before_end=50.0, growth_h=20.0, share=0.20),
                PlannedShort(oldest=5, hours_before_end=20.0, growth_h=6.0, share=0.10),
            ),
            bypasses=(PlannedBypass(cell=9, days_before_end=48.0, hours=30.0),),
            outages=(PlannedOutage(57.5, 12.0),),
        ),
    ),
    replace(
        ZINC_WON,
        planned=Planned(
            shorts=(PlannedShort(oldest=3, hours_before_end=18.0, growth_h=5.0, share=0.20),),
            contacts=(PlannedContact(cell=31, days_before_end=40.0, micro_ohm_per_day=0.085),),
            bypasses=(PlannedBypass(cell=6, days_before_end=18.0, hours=24.0),),
            outages=(PlannedOutage(92.4, 6.0), PlannedOutage(19.7, 8.0)),
        ),
    ),
)

# Two hours into the shift, so that one round of three meets the dear hours' lower current.
TRUTH_ROUND_MINUTES = 120

TRUTH_RECIPES = (
    replace(
        COPPER_WON,
        cells=30,
        pen=replace(COPPER_WON.pen, round_minutes=TRUTH_ROUND_MINUTES),
        planned=Planned(
            bypasses=(PlannedBypass(7, 41.0, 24.0), PlannedBypass(22, 9.5, 40.0)),
            outages=(PlannedOutage(52.8, 6.0), PlannedOutage(20.3, 3.0)),
            cuts=(PlannedCut(days_before_end=33.0, days=4.0, share=0.10),),
        ),
    ),
    replace(
        COPPER_REFINED,
        cells=20,
        pen=replace(COPPER_REFINED.pen, round_minutes=TRUTH_ROUND_MINUTES),
        planned=Planned(
            bypasses=(PlannedBypass(5, 30.0, 24.0), PlannedBypass(18, 3.0, None)),
            outages=(PlannedOutage(44.1, 8.0),),
        ),
    ),
    replace(
        ZINC_WON,
        cells=18,
        pen=replace(ZINC_WON.pen, round_minutes=TRUTH_ROUND_MINUTES),
        crop=replace(ZINC_WON.crop, cells_per_lot=9),
        planned=Planned(
            bypasses=(PlannedBypass(12, 26.0, 24.0),),
            outages=(PlannedOutage(37.5, 6.0), PlannedOutage(14.2, 2.0)),
        ),
    ),
)
