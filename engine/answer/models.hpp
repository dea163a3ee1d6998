// SPDX-License-Identifier: GPL-3.0-or-later
// The models of everything fitted in a setup, at one end of all spreads.
#pragma once
#include <map>
#include <optional>
#include <vector>

#include "engine/answer/exposure.hpp"
#include "engine/loss/capacitor_loss.hpp"
#include "engine/loss/rectifier_loss.hpp"
#include "engine/loss/switch_loss.hpp"

namespace binwright {

struct BankModel {
    CapacitorModel model;
    int count;
};
struct Models {
    std::optional<SwitchModel> switch_;
    int switch_count = 1;
    std::optional<RectifierModel> rectifier;
    int rectifier_count = 1;
    std::map<Seat, std::vector<BankModel>> banks;  ///< in the order of Setup::fitted
};
[[nodiscard]] Models models_of(const Setup& setup, End end, const Allowances& allowances, double frequency);
[[nodiscard]] Circuit circuit_of(const Setup& setup, const Models& models, End end, const At& at);

/// A pulled capacitor of a kind that dries out (aluminium, hybrid, or of no kind on record) whose C and ESR were not both measured: its age is unknown.
[[nodiscard]] bool ages_unmeasured(const Lot& lot);

[[nodiscard]] const PartExposure* find_exposure(const Exposure& exposure, Seat seat, std::size_t entry);

}  // namespace binwright
