// SPDX-License-Identifier: GPL-3.0-or-later
// One fitted kind held to a rulebook, from what it sees at both ends of all spreads: no solver in here.
#pragma once
#include <functional>
#include <optional>
#include <string>

#include "engine/answer/judge.hpp"

namespace binwright {

/// What the part would see at the worst end if one of its figures were exactly this: over the whole operating range, or at
/// one point of it alone (quick, and never worse than over the range). Empty: cannot be computed.
using Probe = std::function<std::optional<PartExposure>(Symbol figure, double value, const At* only)>;
/// Likewise with another heatsink [K/W].
using SinkProbe = std::function<std::optional<PartExposure>(double resistance, const At* only)>;

/// The heatsink that a part stands on.
struct SinkShare {
    std::string name;       ///< of [heatsink.x]
    double resistance = 0;  ///< [K/W]
    double power = 0;       ///< of everything on it, where the losses are largest [W]
};

struct JudgedPart {
    Seat seat{};
    std::string reference;
    Lot lot;
    int count = 1;                        ///< in parallel
    PartExposure best, worst;             ///< at the best and the worst end of all spreads
    bool shares_air = false;              ///< an enclosure holds the air: where a junction runs away, all in it goes with it
    bool runaway_best = false, runaway_worst = false;  ///< somewhere in the range no stable temperature exists
    double lowest_ambient = 298.15, highest_ambient = 298.15;  ///< [K]
    At top{};                             ///< the upper ends of the operating range (for what may be lowered)
    std::optional<double> life_required;    ///< [s]
    std::optional<double> ripple_allowed;   ///< at the output, peak to peak [V]
    std::optional<double> drive_lowest, drive_highest;  ///< gate drive [V]
    bool voltages_only = false;           ///< it merely sits on a voltage: other rules do not apply
    std::string today;                    ///< ISO 8601; empty: measurements do not expire
    std::optional<SinkShare> sink;
    Probe probe;          ///< may be empty: then no bound is searched by solving again
    SinkProbe sink_probe; ///< may be empty: then the relation itself tells the sink
};

/// Verdicts by engine rules: holds needs known figures, or holding even at the worst end; rejected needs known figures, or a
/// break even at the best end; in between unproven, with the bound where one figure decides.
[[nodiscard]] SeatReport judge_part(const JudgedPart& part, const Rulebook& book);

/// A seat without a part: an empty one, or a bare circuit element.
[[nodiscard]] SeatReport judge_empty(Seat seat, const std::string& reference, bool element, const std::string& book);

/// The converter's own findings (regulation).
[[nodiscard]] std::vector<Finding> judge_converter(const PartExposure& best, const PartExposure& worst, const Rulebook& book);

/// Why a part lies outside what its family's models are made for (P-channel, bipolar …), or empty.
[[nodiscard]] std::string not_covered_why(const Part& part);

/// A finding that no bound decides; the verdict of an unfit ground is unproven, of not_covered and no_rule not covered.
[[nodiscard]] Finding ground_finding(Ground ground, std::string why);

/// Gravest first, then the least headroom, then the rule's id.
void sort_findings(std::vector<Finding>& findings);

/// limit of a rule at a rating or requirement (temperature shares taken in °C); the rating is ignored by absolute bounds.
[[nodiscard]] double limit_of(const Rule& rule, double rating);
/// Whether a stress lies beyond a limit; equal to 1e-9 relative is not. NaN does.
[[nodiscard]] bool breaks(const Rule& rule, double stress, double limit);

/// The next value of a rating that can be had: usual series of voltages and temperatures, else E12 (currents, life).
/// Empty beyond the end of a series.
[[nodiscard]] std::optional<double> usual_value(Symbol rating, double at_least);

/// What would mend a broken finding: only what acts on its rule.
[[nodiscard]] std::vector<Remedy> remedies_for(const Finding& finding, const JudgedPart& part, double scale);

/// Whether the rule holds at a value, over the range or at one point alone; empty where it cannot be told.
using HoldsAt = std::function<std::optional<bool>(double value, const At* only)>;
/// The value up to which (or, where higher is better, from which) a rule holds, within 0.5 % on its safe side, between a
/// harmless and a harmful one. Searched at one point, where beyond it the rule certainly breaks, and then proved over the whole
/// range; searched over the range where the proof fails. Empty where the harmless value breaks or the harmful one does not.
[[nodiscard]] std::optional<double> bound_between(double harmless, double harmful, const HoldsAt& holds, const At* point);

/// Rounded to significant digits away from where it would break: down, or up.
[[nodiscard]] double rounded_down(double value, int digits);
[[nodiscard]] double rounded_up(double value, int digits);

}  // namespace binwright
