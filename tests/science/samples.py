"""Three values for every input of the science that may be an array, by its name in signatures."""

# Far enough apart that a mixed-up element shows, and inside what every formula takes.
_BY_VALUES = {
    (1.9, 2.0, 2.15): """volts values potential_v equilibrium_v standard_v cell_volts kwh kah ka
        metal_kg metal_value_per_kg ferric_g_l start_g_l impurity_kg_s ratio value limit
        false_per_thousand standard_uncertainty element_kg""",
    (0.1, 0.2, 0.35): """overpotential_v slope_v gas_share top_gas_share short_ohm activity_ratio
        metal_activity acid_activity mol_kg density_difference_share share_of_limit constant slope
        insoluble_share element_share to_slimes_share impurity_share to_solution_share activity
        flux_density_t dissolved_kg_s loss_share resistive_share other_losses_share copper_kg_s
        leaves_otherwise_kg_s chemical_kg_s autocorrelation anode_activity scrap_share share ohm
        prior_ohm standard_uncertainty_ohm prior_standard_uncertainty_ohm""",
    (0.9, 0.8, 0.6): """current_efficiency anodic_efficiency plating_efficiency distance_m
        cathode_activity transfer oxygen_bar section_m2 share_of_annealed efficiency
        reference_u_share""",
    (0.6, 0.5, 0.4): "cathodic_efficiency cathodic_transfer",
    (1.5, 0.5, 0.7): "anodic_transfer height_m length_m back_volts now current_ratio",
    (0.0, 0.5, 1.5): "shift",
    (1.0, 2.0, 2.0): "electrons",
    (298.15, 318.15, 333.15): "temperature_k from_k reference_k",
    (310.0, 300.0, 300.0): "to_k",
    (20e3, 25e3, 31e3): """amps reference_amps current_a liberator_a energy_j charge_c before_c
        after_c activation_j_mol gibbs_j_mol enthalpy_j_mol duration_s anode_life_s""",
    (250.0, 300.0, 340.0): "current_density_a_m2 current_a_m2 run_length",
    (600.0, 700.0, 900.0): """limiting_a_m2 mol_m3 short_a crop_s volume_m3 kinetic_a_m2
        energy_j_kg""",
    (10.0, 50.0, 100.0): """exchange_a_m2 degc percent tonnes microohm millivolts rotation_rad_s
        degrees_of_freedom""",
    (380.0, 395.5, 410.0): "mass_kg anode_kg dissolved_kg fresh_kg lost_kg stripped_kg",
    (35.0, 40.0, 48.0): """metal_g_l salt_g_l copper conductivity_s_m area_m2 cathode_area_m2 pairs
        cells path_ohm volts_to_earth string_volts limit_g_l slimes_kg entropy_j_mol_k""",
    (150.0, 175.0, 190.0): "acid_g_l acid scrap_kg",
    (0.02, 0.03, 0.045): "gap_m shorted_share",
    (5e-10, 7e-10, 9e-10): "diffusivity_m2_s reference_m2_s",
    (8e-7, 1.0e-6, 1.2e-6): """viscosity_m2_s transfer_m_s resistance_ohm
        differential_resistance_ohm""",
    (1e-4, 1.5e-4, 2e-4): "film_m contact_ohm_m2 bleed_m3_s coefficient_v_k",
    (8e-4, 9e-4, 1e-3): "viscosity_pa_s pair_ohm u_deviation_v",
    (1e9, 1e13, 1e14): "schmidt_grashof",
    (990.0, 980.0, 970.0): "water_kg_m3",
    (-0.01, -0.02, -0.03): "deviation_v",
    (1e-7, 2e-7, 3e-7): "u_differential_resistance_ohm",
    (-0.8, -0.7, -0.9): "cathode_potential_v",
    (4.0, 5.0, 6.0): "evidence",
    (1.0, 9.0, 40.0): "readings sigma",
    (0.05, 0.1, 0.2): "low",
    (0.3, 0.4, 0.6): "high",
}
SAMPLES = {name: values for values, names in _BY_VALUES.items() for name in names.split()}
