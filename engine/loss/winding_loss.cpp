// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/loss/winding_loss.hpp"

#include <fmt/format.h>

#include <cmath>

#include "engine/fault.hpp"

namespace binwright {
namespace {

void above_zero(const char* what, const std::optional<double>& value) {
    if (value && !(*value > 0 && std::isfinite(*value))) throw OutsideModel(fmt::format("{} is {:.4g}; it must be above 0", what, *value));
}

}  // namespace

std::optional<double> flux_amplitude(const CoreModel& core, double swing) {
    above_zero("the number of turns", core.turns);
    above_zero("the core's area", core.area);
    above_zero("the inductance", core.inductance);
    if (!core.inductance || !core.turns || !core.area) return std::nullopt;
    return *core.inductance * swing / (2 * *core.turns * *core.area);
}

std::optional<double> core_loss(const CoreModel& core, const CoreRipple& ripple) {
    if (core.loss) return core.loss;
    if (!(ripple.swing >= 0)) throw OutsideModel(fmt::format("the ripple is {:.4g} A; it must be 0 or more", ripple.swing));
    if (!(ripple.frequency > 0)) throw OutsideModel(fmt::format("the frequency is {:.4g} Hz; it must be above 0", ripple.frequency));
    above_zero("the core's volume", core.volume);
    const auto flux = flux_amplitude(core, ripple.swing);
    if (!flux || !core.volume || core.steinmetz.size() != 3) return std::nullopt;
    return *core.volume * core.steinmetz[0] * std::pow(ripple.frequency, core.steinmetz[1]) * std::pow(*flux, core.steinmetz[2]);
}

}  // namespace binwright
