// SPDX-License-Identifier: GPL-3.0-or-later
// Verdicts: what is fitted held to a rulebook, and the bin's lots ranked for a seat. Numbers only; engine/words makes
// sentences of them.
#pragma once
#include <optional>
#include <string>
#include <vector>

#include "engine/answer/exposure.hpp"

namespace binwright {

enum class Verdict { holds, unproven, rejected, not_covered };
[[nodiscard]] std::string_view to_string(Verdict verdict);  ///< "holds", "unproven", "rejected", "not covered"
/// The graver of two: rejected > unproven > not covered > holds.
[[nodiscard]] Verdict graver(Verdict a, Verdict b);

enum class Do { rating, operating, parallel, heatsink, measure, swap };
[[nodiscard]] std::string_view to_string(Do action);

struct Remedy {
    Do action{};
    std::string figure;             ///< "U_R", "output_voltage", "ESR", "heatsink.small.resistance", "count"
    Unit unit = Unit::none;
    std::optional<double> at_least, at_most;
    std::optional<double> usual;    ///< next value that can be had
    Conditions at;                  ///< of a measurement
    std::optional<double> accuracy; ///< of a measurement: this near is near enough, as a fraction
};

/// The figure whose value decides an unproven finding.
struct Bound {
    Symbol figure{};
    std::optional<double> at_most, at_least;
    Conditions at;
};

/// What decides a finding: a rule's bound, or something about the part that no bound can weigh.
enum class Ground {
    rule,
    nothing_fitted,  ///< the seat is empty
    bare_element,    ///< a circuit element stands there, no part is chosen
    not_covered,     ///< outside what the family's models are made for
    no_rule,         ///< the rulebook has no rule for such a part
    suspect,         ///< a reading lies outside the type's limits
    unmeasured,      ///< pulled, of a kind that ages, and not measured
    expired,         ///< measured too long ago, of a kind that ages
    outside_model,   ///< the converter cannot be computed with it
};

struct Finding {
    Seat seat{};
    bool of_converter = false;  ///< a finding of the whole converter (regulation): seat is meaningless
    std::string reference;      ///< "C12"
    std::string lot;            ///< label; empty for typed figures or a bare element
    std::string part;           ///< name of the type
    std::string book;           ///< rulebook that the rule stands in (of one based on another: the one it comes from)
    Rule rule;                  ///< of several bounds with the one that binds here as its own
    Verdict verdict = Verdict::unproven;
    std::optional<StressValue> stress;  ///< at the end that decides the verdict (worst; best when rejected outright)
    std::optional<double> rating, limit;
    std::optional<double> used, left, headroom;  ///< contract.md, JSON
    std::optional<Bound> bound;
    std::string missing;                ///< the figure not on record, when that is why
    Ground ground = Ground::rule;
    std::string why;                    ///< where the ground is no rule: what is the matter, as a sentence without its full stop
    std::vector<Figure> told;           ///< figures to vouch for: it would be decided if they were known
    std::optional<double> printed;      ///< the rating as printed, where `rating` is what is left of it here (case, cold, frequency)
    std::vector<std::string> rests_on;
    std::vector<Remedy> remedies;
    std::vector<std::string> goes_before;   ///< ids of the more general rules that this one stands in for
    std::vector<std::string> binds_before;  ///< ids of the other rules on this stress, of which this is the tightest
};

struct SeatReport {
    Seat seat{};
    std::string reference, lot, part;  ///< of one fitted kind
    Verdict verdict = Verdict::unproven;
    std::vector<Finding> findings;     ///< gravest and tightest first
};

struct CheckReport {
    Verdict verdict = Verdict::unproven;
    std::vector<SeatReport> seats;
    std::vector<SeatReport> beside;    ///< fuse, cores, sense resistor, what sits across a voltage; `seat` means nothing there
    std::vector<Finding> converter;    ///< regulation
    Exposure exposure;                 ///< at the worst end
};

/// Judges what is fitted. @throws as expose
[[nodiscard]] CheckReport check(const Setup& setup, const Rulebook& book, const Progress& progress = {});

enum class Prefer { headroom, cool, life, thrift };
[[nodiscard]] std::optional<Prefer> find_prefer(std::string_view text);
[[nodiscard]] std::string_view to_string(Prefer prefer);

struct Candidate {
    Lot lot;
    SeatReport report;
    std::vector<std::string> knock_on;  ///< seats of others whose verdict changes because of it, with both verdicts
    double preference = 0;              ///< larger is better, within one verdict
};

/// Judges each lot in the seat, everything else as fitted; best first: verdict, then the preference, then the label.
/// A lot with fewer pieces than the seat's count is judged with what it has.
[[nodiscard]] std::vector<Candidate> rank(const Setup& setup, Seat seat, const std::vector<Lot>& lots, const Rulebook& book,
                                          Prefer prefer = Prefer::headroom, const Progress& progress = {});

}  // namespace binwright
