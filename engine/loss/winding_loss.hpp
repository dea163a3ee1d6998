// SPDX-License-Identifier: GPL-3.0-or-later
// Loss of a choke or transformer winding: copper, and the core where its data are given.
#pragma once
#include <optional>
#include <vector>

namespace binwright {

/// A core as a file gives it. Absent = not on record; then there is no core loss to tell.
struct CoreModel {
    std::optional<double> loss;        ///< given as such, whatever flows [W]
    std::optional<double> inductance;  ///< [H]
    std::optional<double> turns;
    std::optional<double> area;        ///< effective [m²]
    std::optional<double> volume;      ///< effective [m³]
    std::vector<double> steinmetz;     ///< k, α, β of P/V = k·f^α·B^β [W/m³, Hz, T]
};

/// The ripple that a core sees.
struct CoreRipple {
    double swing;      ///< of the current, peak to peak [A], ≥ 0
    double frequency;  ///< [Hz], > 0
};

/// Amplitude of the flux density, L·ΔI/(2·N·A_e) [T]. Empty where inductance, turns or area are missing.
[[nodiscard]] std::optional<double> flux_amplitude(const CoreModel& core, double swing);

/// The loss given as such; else Steinmetz' law (C. P. Steinmetz, On the Law of Hysteresis, 1892, with the exponent of frequency
/// that core makers add) at the flux amplitude of the ripple, for a sine of the same amplitude; bias is not in it. Empty where
/// neither can be told.
/// @throws OutsideModel on a swing below 0, a frequency not above 0, or an area, volume or number of turns not above 0
[[nodiscard]] std::optional<double> core_loss(const CoreModel& core, const CoreRipple& ripple);

}  // namespace binwright
