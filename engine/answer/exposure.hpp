// SPDX-License-Identifier: GPL-3.0-or-later
// What each position really sees: electrical stresses, losses, temperatures and life of every fitted part, worst over the
// operating range, each with the point at which it occurs and the terms it is made of.
#pragma once
#include <functional>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "engine/converter/converter.hpp"
#include "engine/rule/rule.hpp"

namespace binwright {

struct Fitted {
    Lot lot;
    int count = 1;  ///< in parallel
};

/// A converter with its fitted parts found in the bin. Typed figures of the file are laid over the part (label empty when
/// there is no lot). A seat missing here has a bare element or nothing.
struct Setup {
    Converter converter;
    std::map<Seat, std::vector<Fitted>> fitted;
};

/// Finds fitted lots through `find` (label or part name → lot). @throws InputError at the place of a name not found, or
/// of a lot whose family does not fit the seat
[[nodiscard]] Setup assemble(Converter converter, const std::function<std::optional<Lot>(const std::string&)>& find);

/// The same setup with one seat's parts replaced (for ranking).
[[nodiscard]] Setup with_fitted(const Setup& setup, Seat seat, std::vector<Fitted> fitted);

struct Term {
    std::string name;  ///< "input", "output", "drop", "ripple", "overshoot" …
    double value;
};

struct StressValue {
    Stress stress{};
    double value = 0;
    At at;                         ///< where it is worst
    std::vector<Term> made_of;     ///< sums to value within 1e-9 relative
    std::vector<std::string> rests_on;  ///< assumptions used: "overshoot 20 % of 29.6 V, not measured" …
};

struct Loss {
    std::string name;  ///< "switch conduction", "rectifier leakage", "primary winding copper" …
    std::optional<Seat> seat;
    double power;  ///< [W]
};

/// Of one fitted kind in one seat.
struct PartExposure {
    std::vector<StressValue> stresses;
    std::vector<std::pair<Stress, std::string>> missing;  ///< not computable, and the figure that is missing: "ESR"
    [[nodiscard]] const StressValue* find(Stress stress) const;
};

struct Exposure {
    std::map<Seat, std::vector<PartExposure>> seats;  ///< as Setup::fitted; a bare element gives one PartExposure
    std::vector<PartExposure> beside;                 ///< fuse, cores, sense resistor …: in the order of beside_of
    PartExposure converter;                           ///< regulation
    At hottest;                        ///< the point of the largest total loss
    std::vector<Loss> losses;          ///< there; sums to P_in − P_out
    double efficiency_total = 0;       ///< there
    std::vector<std::string> not_included;  ///< losses that could not be computed, with what is missing
    std::vector<std::string> assumptions;   ///< "open air", "overshoot …"
    std::vector<std::string> warnings;
    bool runaway = false;              ///< no stable temperature exists somewhere in the range
};

/// @throws InputError when the file lacks what no answer can do without (a winding, an output capacitor); OutsideModel
[[nodiscard]] Exposure expose(const Setup& setup, End end, const Allowances& allowances, const Progress& progress = {});

/// Electrical only, every fitted part or bare element at its typical figures: what `stress` prints.
struct ElectricalPoint {
    At at;
    SteadyState state;
};
struct ElectricalReport {
    std::vector<ElectricalPoint> points;  ///< the corners and middles looked at, or the one asked for
    struct Worst { std::string name; double value; At at; };  ///< name: "switch.voltage_peak" …
    std::vector<Worst> worst;
    std::vector<std::string> assumptions;
};
/// `fixed` are "KEY=VALUE" pairs (operating keys, or duty); empty: over the operating range.
[[nodiscard]] ElectricalReport electrical(const Setup& setup, const std::vector<std::string>& fixed,
                                          const Progress& progress = {});

/// The circuit of a setup at one end, and the point for the solver (exposed for tests, waveforms and tools).
[[nodiscard]] Circuit circuit_of(const Setup& setup, End end, const Allowances& allowances, const At& at);
[[nodiscard]] OperatingPoint point_of(const Setup& setup, const At& at);

}  // namespace binwright
