// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/answer/wanted.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include "engine/answer/judge_setup.hpp"
#include "engine/converter/keys.hpp"
#include "engine/loss/figures.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {
namespace {

constexpr double kFarthest = 10;      ///< a figure that may be this many times worse decides nothing
constexpr double kSolved = 1e-6;      ///< of a bound found by solving, relative: far below what 1 % of any figure does
constexpr double kJudged = 1e-10;     ///< and of a rating, which needs no solving
constexpr double kWorse = 0.01;

Family family_at(Seat seat) {
    return seat == Seat::switch_ ? Family::switch_ : seat == Seat::rectifier ? Family::rectifier : Family::capacitor;
}

/// Figures of a small part of a kind, where nothing is fitted to start from. Common practice, no source.
struct Usual {
    const char* technology;
    std::vector<std::pair<Symbol, const char*>> figures;
};
const std::vector<Usual>& usual_parts(Family family) {
    using enum Symbol;
    static const std::vector<Usual> switches = {
        {"", {{R_DSon, "40 mΩ max @ 10 V"}, {Q_g, "50 nC max @ 10 V"}, {Q_gd, "18 nC max"}, {Q_gs, "12 nC max"}, {C_oss, "350 pF typ @ 25 V"}, {R_g, "2 Ω typ"}, {V_GSth, "3 V typ"},
              {T_jmax, "150 °C"}, {R_thjc, "1.7 K/W max"}, {R_thja, "62 K/W max"}, {V_DSS, "60 V"}, {V_GSS, "20 V"}, {I_D, "30 A"}, {I_DM, "120 A"}, {P_tot, "75 W"}}}};
    static const std::vector<Usual> rectifiers = {
        {"schottky", {{V_F, "0.65 V max @ 10 A, 25 °C"}, {V_F, "0.57 V max @ 10 A, 125 °C"}, {I_R, "10 mA max @ 45 V, 100 °C"}, {C_j, "400 pF max @ 4 V"}, {T_jmax, "150 °C"},
                      {R_thjc, "2.2 K/W max"}, {R_thja, "60 K/W max"}, {V_RRM, "60 V"}, {I_FAV, "10 A"}, {I_FSM, "150 A"}}},
        {"", {{V_F, "1.1 V max @ 8 A, 25 °C"}, {V_F, "0.95 V max @ 8 A, 125 °C"}, {I_R, "0.1 mA max @ 200 V, 100 °C"}, {C_j, "60 pF max @ 4 V"}, {Q_rr, "60 nC max"}, {T_jmax, "150 °C"},
              {R_thjc, "2.5 K/W max"}, {R_thja, "60 K/W max"}, {V_RRM, "200 V"}, {I_FAV, "8 A"}, {I_FSM, "100 A"}}}};
    static const std::vector<Usual> capacitors = {
        {"polymer", {{C, "330 µF"}, {ESR, "15 mΩ max @ 100 kHz"}, {I_ripple, "4 A @ 100 kHz, 105 °C"}, {T_max, "105 °C"}, {life, "5000 h"}, {U_R, "25 V"}}},
        {"film", {{C, "22 µF"}, {ESR, "8 mΩ max @ 100 kHz"}, {I_ripple, "3.5 A @ 100 kHz, 105 °C"}, {T_max, "105 °C"}, {U_R, "63 V"}}},
        {"ceramic 2", {{C, "22 µF"}, {ESR, "4 mΩ max @ 100 kHz"}, {I_ripple, "3 A @ 100 kHz, 105 °C"}, {T_max, "125 °C"}, {U_R, "50 V"}}},
        {"ceramic 1", {{C, "100 nF"}, {ESR, "10 mΩ max @ 100 kHz"}, {I_ripple, "2 A @ 100 kHz, 105 °C"}, {T_max, "125 °C"}, {U_R, "50 V"}}},
        {"tantalum", {{C, "100 µF"}, {ESR, "80 mΩ max @ 100 kHz"}, {I_ripple, "1.2 A @ 100 kHz, 85 °C"}, {T_max, "125 °C"}, {U_R, "35 V"}}},
        {"tantalum polymer", {{C, "100 µF"}, {ESR, "30 mΩ max @ 100 kHz"}, {I_ripple, "2 A @ 100 kHz, 105 °C"}, {T_max, "105 °C"}, {U_R, "25 V"}}},
        {"", {{C, "470 µF"}, {ESR, "50 mΩ max @ 100 kHz"}, {I_ripple, "1.5 A @ 100 kHz, 105 °C"}, {T_max, "105 °C"}, {life, "5000 h"}, {U_R, "35 V"}}}};
    return family == Family::switch_ ? switches : family == Family::rectifier ? rectifiers : capacitors;
}

/// Losses in the order in which they are let go, then what the models of life and warming rest on.
const std::vector<Symbol>& losses_of(Family family) {
    using enum Symbol;
    static const std::vector<Symbol> switches = {R_DSon, Q_gd, Q_gs, Q_g, C_oss, R_g, R_thjc, R_thja};
    static const std::vector<Symbol> rectifiers = {V_F, I_R, Q_rr, t_rr, C_j, R_thjc, R_thja};
    static const std::vector<Symbol> capacitors = {ESR, C, I_ripple, life, T_max};
    return family == Family::switch_ ? switches : family == Family::rectifier ? rectifiers : capacitors;
}
const std::vector<Symbol>& ratings_of(Family family) {
    using enum Symbol;
    static const std::vector<Symbol> switches = {T_jmax, I_D, P_tot, I_DM, V_GSS, V_DSS};
    static const std::vector<Symbol> rectifiers = {T_jmax, I_FAV, I_FSM, V_RRM};
    static const std::vector<Symbol> capacitors = {U_R};
    return family == Family::switch_ ? switches : family == Family::rectifier ? rectifiers : capacitors;
}

bool more_is_better(Symbol symbol) { return info(symbol).better == Better::higher || symbol == Symbol::C; }

void scale(Part& part, Symbol symbol, double factor) {
    const double zero = info(symbol).unit == Unit::celsius ? kCelsiusZero : 0;
    for (Figure& figure : part.figures)
        if (figure.symbol == symbol)
            for (double* value : {&figure.value.best, &figure.value.typical, &figure.value.worst}) *value = zero + (*value - zero) * factor;
}
bool has(const Part& part, Symbol symbol) {
    return std::any_of(part.figures.begin(), part.figures.end(), [&](const Figure& one) { return one.symbol == symbol; });
}

bool good(const SeatReport& report) {
    return std::none_of(report.findings.begin(), report.findings.end(), [](const Finding& one) { return one.verdict == Verdict::rejected || one.verdict == Verdict::unproven; });
}
bool good(const std::optional<SeatReport>& report) { return report && good(*report); }

/// How a part stands in its seat, everything else as fitted.
class Trial {
  public:
    Trial(const Setup& setup, Seat seat, int count, const Rulebook& book, const Progress& progress) : setup_(setup), seat_(seat), count_(count), book_(book), progress_(progress) {}

    /// By solving again. Empty: cannot be computed with it.
    std::optional<SeatReport> solve(const Part& part) {
        if (progress_ && !progress_(std::min(0.99, ++solved_ / 150.0))) throw Stopped();
        const Setup with = with_part(part);
        const Progress going = progress_ ? Progress([this](double) { return progress_(std::min(0.99, solved_ / 150.0)); }) : Progress();
        try {
            ends_.worst = expose(with, End::worst, book_.allowances, going);
            ends_.best = ends_.worst;
            const SeatReport report = judge_setup(with, ends_, book_, {seat_}, false).front();
            if (!good(report)) return report;
            ends_.best = expose(with, End::best, book_.allowances, going);  // what the others are at their best may be the harder on this one
        } catch (const OutsideModel&) {
            return std::nullopt;
        }
        return judge_setup(with, ends_, book_, {seat_}, false).front();
    }
    /// By what the part last solved sees: for ratings, which change nothing in the circuit.
    SeatReport judge(const Part& part) const { return judge_setup(with_part(part), ends_, book_, {seat_}, false).front(); }

  private:
    Setup with_part(const Part& part) const {
        Lot lot;
        lot.part = part;
        lot.count = count_;
        return with_fitted(setup_, seat_, {Fitted{lot, count_}});
    }
    const Setup& setup_;
    Seat seat_;
    int count_;
    const Rulebook& book_;
    const Progress& progress_;
    BothEnds ends_;
    int solved_ = 0;
};

/// The part that is looked for, at its start: as fitted, else what is usual; every figure exact and known.
Part start_of(const Setup& setup, Seat seat, const std::string& technology) {
    const Family family = family_at(seat);
    Part part;
    part.family = family;
    const auto fitted = setup.fitted.find(seat);
    if (fitted != setup.fitted.end() && !fitted->second.empty() && not_covered_why(fitted->second.front().lot.part).empty() &&
        (technology.empty() || attribute(fitted->second.front().lot.part, "technology") == technology))
        part = fitted->second.front().lot.part;
    part.name = "wanted";
    part.attributes.erase("can");  // the size of what is fitted is not that of what is looked for
    if (!technology.empty()) part.attributes["technology"] = technology;
    if (attribute(part, "technology").empty() && family != Family::switch_) part.attributes["technology"] = family == Family::rectifier ? "schottky" : "aluminium";
    std::vector<Figure> kept;
    for (Figure figure : part.figures) {
        figure.value = {figure.value.worst, figure.value.worst, figure.value.worst};
        figure.known = Known::datasheet;
        figure.date = figure.method = "";
        const bool losses = figure.symbol == Symbol::V_F;  // a curve; all else is one number
        if (losses || std::none_of(kept.begin(), kept.end(), [&](const Figure& one) { return one.symbol == figure.symbol; })) kept.push_back(figure);
    }
    if (std::any_of(kept.begin(), kept.end(), [](const Figure& one) { return one.symbol == Symbol::ESR; }))
        std::erase_if(kept, [](const Figure& one) { return one.symbol == Symbol::tan_delta; });
    part.figures = std::move(kept);
    const std::vector<Usual>& kinds = usual_parts(family);
    auto kind = std::find_if(kinds.begin(), kinds.end(), [&](const Usual& one) { return attribute(part, "technology") == one.technology; });
    if (kind == kinds.end()) kind = std::prev(kinds.end());
    const Part had = part;
    for (const auto& [symbol, text] : kind->figures)
        if (!has(had, symbol) && !(symbol == Symbol::ESR && has(had, Symbol::tan_delta))) part.figures.push_back(parse_figure(symbol, text, Known::datasheet));
    return part;
}

std::vector<std::string> broken_rules(const SeatReport& report) {
    std::vector<std::string> out;
    for (const Finding& one : report.findings)
        if (one.verdict == Verdict::rejected || one.verdict == Verdict::unproven) out.push_back(one.rule.id);
    return out;
}

/// How far a figure may go: the last factor that holds, 1 where not even a little more does; empty where the farthest still holds.
/// `rules` are those that break just beyond.
using Look = std::function<std::optional<SeatReport>(const Part&)>;
std::optional<double> farthest(const Part& part, Symbol symbol, double limit, double precise, const Look& look, std::vector<std::string>& rules) {
    const bool up = !more_is_better(symbol);
    const auto ok = [&](double factor) {
        Part other = part;
        scale(other, symbol, up ? factor : 1 / factor);
        const auto report = look(other);
        if (good(report)) return true;
        rules = report ? broken_rules(*report) : std::vector<std::string>{};
        return false;
    };
    double inside = 1, outside = 1 + kWorse / 2;
    if (ok(outside)) {
        do {
            inside = outside;
            if (inside >= limit) return std::nullopt;
            outside = std::min(limit, outside * (outside < 1.1 ? 1.1 : 1.4));
        } while (ok(outside));
    }
    while (outside / inside - 1 > precise) {
        const double middle = std::sqrt(inside * outside);
        (ok(middle) ? inside : outside) = middle;
    }
    return inside;
}

}  // namespace

Part worse_in(const Part& part, Symbol figure, double share) {
    Part out = part;
    scale(out, figure, more_is_better(figure) ? 1 - share : 1 + share);
    return out;
}

Wanted wanted(const Setup& setup, Seat seat, const Rulebook& book, const std::string& technology, const Progress& progress) {
    Wanted out;
    out.seat = seat;
    out.reference = setup.converter.reference(seat);
    const Family family = family_at(seat);
    out.count = std::max(1, setup.converter.seat(seat).count);
    if (const auto fitted = setup.fitted.find(seat); fitted != setup.fitted.end() && !fitted->second.empty()) {
        out.count = 0;
        for (const Fitted& one : fitted->second) out.count += one.count;
    }
    if (!technology.empty())
        for (const AttributeInfo& one : attributes())
            if (one.name == "technology" && (one.families & bit(family))) {
                const std::vector<std::string> words = split_words(one.words);
                const std::string near = nearest_word(technology, words);
                if (!words.empty() && std::find(words.begin(), words.end(), technology) == words.end())
                    throw InputError(Fault{{}, "technology", "a " + std::string(to_string(family)) + " has no technology \"" + technology + "\"" + (near.empty() ? "" : "; did you mean \"" + near + "\"?"), "one of " + std::string(one.words)});
            }
    Trial trial(setup, seat, out.count, book, progress);
    Part part = start_of(setup, seat, technology);

    // Better by a quarter at a time until it holds, with ratings that stand in nobody's way.
    const std::vector<Symbol>&losses = losses_of(family), &ratings = ratings_of(family);
    const Part start = part;
    const auto generous = [&](Part one) {
        for (const Symbol symbol : ratings)
            if (symbol != Symbol::T_jmax) scale(one, symbol, 20);
        return one;
    };
    std::optional<SeatReport> report = trial.solve(generous(part));
    const bool banned = report && std::any_of(report->findings.begin(), report->findings.end(), [](const Finding& one) { return one.rule.bound == BoundKind::not_permitted; });
    for (int step = 0; step < 24 && !good(report) && !banned; ++step) {
        for (const Symbol symbol : losses)
            if (symbol != Symbol::T_max && symbol != Symbol::R_g) scale(part, symbol, more_is_better(symbol) ? 1.25 : 0.8);
        if (step == 12)  // what the maker's figures cannot do, a warmer part may
            for (Figure& figure : part.figures)
                if ((figure.symbol == Symbol::T_jmax && figure.value.worst < kCelsiusZero + 175)) figure.value = {kCelsiusZero + 175, kCelsiusZero + 175, kCelsiusZero + 175};
        report = trial.solve(generous(part));
    }
    if (!good(report)) {
        report = trial.solve(generous(start));
        out.part = start;
        if (report) out.report = *report;
        return out;
    }

    // Ratings at the next value that can be had, so that a peak does not hang on them alone while losses are let go.
    part = generous(part);
    std::map<Symbol, std::vector<std::string>> rules;
    const auto fewest = [&](Symbol symbol) {
        const bool circuit = symbol == Symbol::U_R && attribute(part, "technology").starts_with("ceramic");
        const Look look = [&](const Part& one) { return circuit ? trial.solve(one) : std::optional(trial.judge(one)); };
        return farthest(part, symbol, 1e6, circuit ? kSolved : kJudged, look, rules[symbol]);
    };
    for (const Symbol symbol : ratings) {
        if (!has(part, symbol) || symbol == Symbol::T_jmax) continue;
        const auto factor = fewest(symbol);
        if (!factor) continue;
        Figure& figure = *std::find_if(part.figures.begin(), part.figures.end(), [&](const Figure& one) { return one.symbol == symbol; });
        const double least = figure.value.worst / *factor, legs = figure.both_legs ? 2 : 1;
        const double had = usual_value(symbol, 1.02 * least / legs).value_or(1.2 * least / legs) * legs;
        figure.value = {had, had, had};
    }
    if (!good(trial.solve(part))) part = generous(part);

    std::vector<Symbol> bound;
    for (const Symbol symbol : losses) {
        if (!has(part, symbol)) continue;
        const auto factor = farthest(part, symbol, kFarthest, kSolved, [&](const Part& one) { return trial.solve(one); }, rules[symbol]);
        const double by = factor.value_or(kFarthest);
        scale(part, symbol, more_is_better(symbol) ? 1 / by : by);
        if (factor) bound.push_back(symbol);
        else out.any.push_back(symbol);
    }
    if (!good(trial.solve(part))) return out;
    for (const Symbol symbol : ratings) {
        if (!has(part, symbol)) continue;
        const auto factor = fewest(symbol);
        if (!factor) {
            out.any.push_back(symbol);
            continue;
        }
        scale(part, symbol, 1 / *factor);
        bound.push_back(symbol);
        if (symbol == Symbol::U_R && attribute(part, "technology").starts_with("ceramic")) static_cast<void>(trial.solve(part));
    }

    // The proof, by solving: it holds, and worse in any line it does not.
    report = trial.solve(part);
    out.part = part;
    if (report) out.report = *report;
    if (!good(report)) return out;
    for (const Symbol symbol : bound) {
        WantedLine line;
        line.figure = symbol;
        line.at_least = more_is_better(symbol);
        for (const Figure& figure : part.figures)
            if (figure.symbol == symbol) line.bounds.push_back(figure);
        const auto worse = trial.solve(worse_in(part, symbol, kWorse));
        if (good(worse)) {
            out.any.push_back(symbol);
            continue;
        }
        line.rules = rules[symbol];
        const double legs = line.bounds.front().both_legs ? 2 : 1;
        if (info(symbol).rating) line.usual = usual_value(symbol, line.bounds.front().value.worst / legs * (1 - 1e-6));
        out.lines.push_back(std::move(line));
    }
    for (const Finding& one : out.report.findings)
        if (one.verdict == Verdict::not_covered) out.silent.push_back(one);
    out.found = true;
    return out;
}

}  // namespace binwright
